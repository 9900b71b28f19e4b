/** One invented applicant of Saltmarsh Mutual: who applies, what the form, the bureau and the own accounts say, how the loan went. */
import type { Row } from './columns';
import { probabilityAt, within, type Draws } from './random';

const whole = (value: number, lowest: number, highest: number): number => Math.round(within(value, lowest, highest));
const tenth = (value: number): string => String(Math.round(value * 10) / 10);
const unless = (missing: boolean, value: string | number): string => (missing ? '' : String(value));

/** Effect of a value in log odds, read from ascending limits: the first effect belongs below the first limit. */
function step(value: number, limits: readonly number[], effects: readonly number[]): number {
  let place = 0;
  while (place < limits.length && value >= limits[place]) place += 1;
  return effects[place];
}

const ageBand = (age: number): string =>
  age < 25 ? '18-24' : age < 35 ? '25-34' : age < 45 ? '35-44' : age < 55 ? '45-54' : age < 62 ? '55-61' : '62 and over';

const homeEffect = {
  owner: 0.32,
  mortgage: 0.24,
  'private tenant': -0.2,
  'social tenant': -0.28,
  'with family': -0.05,
  other: -0.25,
};
const employmentEffect = {
  permanent: 0.2,
  'fixed term': -0.25,
  'self-employed': -0.22,
  retired: 0.3,
  unemployed: -0.7,
  student: -0.35,
};
const purposeEffect = { car: 0.02, home: 0.03, consolidation: -0.06, holiday: 0, celebration: 0, other: 0 };

export interface Occasion {
  /** Running number of the application, from 1. */
  number: number;
  appliedOn: string;
  /** In the last half-year of the file the trade through brokers grows and applicants are more stretched. */
  afterTheTurn: boolean;
}

export function inventApplicant(draws: Draws, { number, appliedOn, afterTheTurn }: Occasion): Row {
  const { normal, uniform, pick, chance } = draws;
  const channel = pick(
    afterTheTurn
      ? { web: 0.46, branch: 0.15, broker: 0.28, phone: 0.095, staff: 0.015 }
      : { web: 0.46, branch: 0.25, broker: 0.17, phone: 0.105, staff: 0.015 },
  );
  const region = pick({ Harbour: 0.26, Estuary: 0.22, Northmarsh: 0.18, Saltings: 0.14, Downs: 0.12, Fen: 0.08 });
  const memberType = pick({ new: channel === 'broker' ? 0.8 : 0.5, existing: 0.4, returning: 0.1 });
  const age = whole(41 + 13 * normal() + (chance(0.16) ? 16 : 0), 18, 82);
  const sex = pick({ female: 0.48, male: 0.5, 'not stated': 0.02 });

  // What the columns share: habit of paying on time, stretch of the household, settledness.
  const broker = channel === 'broker' ? 1 : 0;
  const habit = normal() - 0.2 * broker + 0.012 * (age - 41);
  const stretch = 0.85 * normal() - 0.35 * habit + 0.2 * broker + (afterTheTurn ? 0.3 : 0);
  const settled = 0.8 * normal() + 0.025 * (age - 41) + 0.1 * habit;

  const home =
    age < 26 && chance(0.4)
      ? 'with family'
      : pick({
          owner: within(0.1 + 0.12 * settled, 0.02, 0.5),
          mortgage: within(0.36 + 0.1 * settled, 0.05, 0.6),
          'private tenant': within(0.3 - 0.1 * settled, 0.05, 0.6),
          'social tenant': within(0.13 + 0.03 * stretch, 0.04, 0.3),
          'with family': 0.05,
          other: 0.03,
        });
  const employment =
    age >= 63 && chance(0.75)
      ? 'retired'
      : age < 24 && chance(0.22)
        ? 'student'
        : pick({
            permanent: 0.7 + 0.04 * habit,
            'fixed term': 0.11,
            'self-employed': 0.13,
            unemployed: within(0.03 + 0.015 * stretch, 0.005, 0.1),
            retired: age > 55 ? 0.1 : 0.002,
          });
  const employed = employment === 'permanent' || employment === 'fixed term' || employment === 'self-employed';
  const incomeLevel = employed ? 1 : employment === 'retired' ? 0.75 : 0.42;
  const income = whole(
    (1950 + 620 * normal() + 170 * settled + (chance(0.12) ? 1500 * uniform() : 0)) * incomeLevel * (afterTheTurn ? 1.04 : 1),
    420,
    9800,
  );
  const amount = Math.round(within(6200 + 3900 * normal() + 0.8 * (income - 1900) + 300 * stretch, 500, 25000) / 50) * 50;
  const term = Number(pick({ '12': 0.12, '24': 0.27, '36': 0.3, '48': 0.17, '60': 0.14 }));
  const payment = (amount * (1 + 0.0045 * term)) / term;
  const paymentToIncome = within((100 * payment) / income, 0.5, 95);
  const purpose = pick({
    car: 0.27,
    home: 0.21,
    consolidation: within(0.2 + 0.08 * stretch, 0.05, 0.5),
    holiday: 0.11,
    celebration: 0.07,
    other: 0.14,
  });
  const monthsAtAddress = whole((uniform() + uniform() * uniform()) * (60 + 22 * settled), 0, 480);
  const monthsInJob = whole((uniform() + uniform() * uniform()) * (48 + 34 * settled), 0, 420);

  const member = memberType === 'existing';
  const monthsAsMember = whole(3 + 110 * uniform() * uniform() + 30 * within(settled, 0, 4), 1, 420);
  const balance = whole(650 + 520 * settled - 420 * stretch + 900 * normal() * uniform(), -900, 25000);
  const overdrawnDays = chance(within(0.45 - 0.14 * habit + 0.12 * stretch, 0.05, 0.95))
    ? whole(28 + 22 * normal() + 16 * stretch, 1, 180)
    : 0;
  const salaryPaidIn = member && employed && chance(0.62 + 0.06 * habit) ? 'yes' : 'no';

  const bureau = !chance(age < 25 ? 0.17 : memberType === 'new' ? 0.07 : 0.035);
  const lines = whole(3.6 + 1.9 * normal() + 0.3 * stretch + 0.02 * (age - 41), 0, 17);
  const card = bureau && lines > 0 && !chance(0.11);
  const utilisation = within(43 + 21 * stretch - 9 * habit + 21 * normal(), 0, 128);
  const unsecured = whole(2900 * within(0.9 + 0.2 * stretch + 0.16 * (lines - 3.6) + 0.45 * normal(), 0, 9), 0, 48000);
  const everArrears = chance(within(0.4 - 0.17 * habit + 0.07 * stretch, 0.03, 0.96));
  const monthsSince = everArrears ? whole(34 * uniform() * (1.15 + 0.45 * habit) + 22 * uniform(), 1, 71) : -996;
  const recentArrears = everArrears && monthsSince <= 24;
  const worst = recentArrears ? whole(1 + 1.1 * uniform() * within(1.2 - 0.75 * habit, 0, 5), 1, 6) : 0;
  const linesInArrears = recentArrears ? whole(0.8 + 0.75 * worst * uniform() + 0.5 * uniform(), 1, 7) : 0;
  const enquiries6 = whole(0.7 + 0.95 * stretch + 1.0 * normal() + (afterTheTurn ? 0.35 : 0), 0, 14);
  const enquiries12 = enquiries6 + whole(0.6 + 0.7 * stretch + 0.9 * normal(), 0, 12);
  const oldestLine = whole(24 + 3.1 * (age - 18) * (0.35 + 0.65 * uniform()) + 22 * normal(), 1, 520);
  const courtRecords = chance(within(0.15 - 0.06 * habit + 0.015 * stretch, 0.01, 0.5)) ? (chance(0.25) ? 2 : 1) : 0;

  const logOdds =
    1.93 +
    (bureau
      ? step(worst, [1, 2, 3], [0.32, -0.4, -0.95, -1.5]) +
        (monthsSince === -996 ? 0.25 : step(monthsSince, [7, 13, 25, 43], [-0.45, -0.28, -0.1, 0.02, 0.12])) +
        (card ? step(utilisation, [10, 25, 45, 65, 85], [0.62, 0.5, 0.22, -0.2, -0.6, -1.1]) : -0.05) +
        step(enquiries6, [1, 2, 3, 5], [0.36, 0.1, -0.2, -0.5, -0.85]) +
        step(oldestLine, [24, 60, 108, 168], [-0.6, -0.25, 0.02, 0.2, 0.36]) +
        step(courtRecords, [1, 2], [0.06, -0.7, -1.15])
      : -0.3) +
    (member
      ? step(overdrawnDays, [1, 11, 31, 61], [0.36, 0.12, -0.22, -0.52, -0.85]) +
        step(monthsAsMember, [12, 36, 84], [-0.05, 0.08, 0.16, 0.24]) +
        step(balance, [0, 400, 1200], [-0.3, -0.05, 0.2, 0.36]) +
        (salaryPaidIn === 'yes' ? 0.12 : 0)
      : -0.1) +
    step(paymentToIncome, [5, 9, 14, 20, 28], [0.6, 0.4, 0.1, -0.2, -0.55, -0.9]) +
    (employed ? step(monthsInJob, [12, 36, 84], [-0.45, -0.05, 0.2, 0.35]) : 0) +
    homeEffect[home] +
    employmentEffect[employment] +
    purposeEffect[purpose] -
    (channel === 'broker' ? 0.18 : 0) -
    (afterTheTurn ? 0.12 : 0);

  const incumbent = whole(
    512 +
      (bureau ? -17 * worst - 7 * within(enquiries6, 0, 5) + (card ? 0.28 * (50 - utilisation) : 0) - 14 * courtRecords : -16) +
      (home === 'owner' || home === 'mortgage' ? 13 : 0) +
      (employed ? 0.13 * within(monthsInJob, 0, 120) : employment === 'retired' ? 12 : -12) +
      17 * normal(),
    330,
    690,
  );
  const staff = channel === 'staff';
  const overridden = chance(0.025);
  const passes = incumbent >= (afterTheTurn ? 492 : 488) && !(bureau && courtRecords > 1);
  const accepted = staff || passes !== overridden;

  const good = chance(probabilityAt(staff ? logOdds + 1.5 : logOdds));
  const indeterminate = chance(good ? 0.03 : 0.08);
  const fromBureau = (value: number): string => String(bureau ? value : -999);
  const fromMember = (value: number): string => String(member ? value : -998);

  return {
    application_id: `SM-${100000 + number}`,
    applied_on: appliedOn,
    channel,
    region,
    member_type: memberType,
    age_band: ageBand(age),
    sex,
    loan_amount: String(amount),
    term_months: String(term),
    purpose: unless(chance(0.012), purpose),
    monthly_income: unless(chance(0.016), income),
    payment_to_income: tenth(paymentToIncome),
    home,
    months_at_address: unless(chance(0.028), monthsAtAddress),
    employment,
    months_in_job: unless(!employed || chance(0.02), monthsInJob),
    dependants: unless(chance(0.022), whole(0.9 + 1.1 * normal(), 0, 6)),
    months_as_member: fromMember(monthsAsMember),
    average_balance_6m: fromMember(balance),
    overdrawn_days_6m: fromMember(overdrawnDays),
    salary_paid_in: salaryPaidIn,
    open_credit_lines: fromBureau(lines),
    unsecured_balance: fromBureau(unsecured),
    card_utilisation: bureau ? (card ? tenth(utilisation) : '-997') : '-999',
    months_since_arrears: fromBureau(monthsSince),
    worst_arrears_24m: fromBureau(worst),
    lines_in_arrears_24m: fromBureau(linesInArrears),
    enquiries_6m: fromBureau(enquiries6),
    enquiries_12m: fromBureau(enquiries12),
    oldest_line_months: fromBureau(oldestLine),
    court_records_6y: fromBureau(courtRecords),
    preferred_contact: unless(chance(0.06), pick({ 'e-mail': 0.55, phone: 0.3, post: 0.15 })),
    statement_day: String(1 + whole(27 * uniform(), 0, 27)),
    form_minutes: channel === 'web' ? tenth(4 + 9 * uniform() + 12 * uniform() * uniform()) : 'NA',
    currency: 'EUR',
    incumbent_score: String(incumbent),
    decision: accepted ? 'accepted' : 'declined',
    outcome_12m: accepted ? (indeterminate ? 'indeterminate' : good ? 'good' : 'bad') : '',
  };
}
