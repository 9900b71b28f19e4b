/** A value that is no measurement. */
export interface SpecialCode {
  code: string;
  meaning: string;
  /** What is done about it beside the bin of its own. */
  treatment: string;
}

/** The columns of the demo file in order, with what a data dictionary says about each. */
export interface ColumnEntry<Name extends string = string> {
  column: Name;
  label: string;
  description: string;
  unit: string;
  specialCodes: readonly SpecialCode[];
}

const noBureau: SpecialCode = {
  code: '-999',
  meaning: 'no bureau record',
  treatment: 'Points of its own bin; a thin file is neither missing nor zero.',
};
const notMember: SpecialCode = {
  code: '-998',
  meaning: 'not a member when applying',
  treatment: 'Points of its own bin; there is no account here to look at.',
};
const noCard: SpecialCode = {
  code: '-997',
  meaning: 'no card',
  treatment: 'Points of its own bin; without a limit there is no share of one.',
};
const neverInArrears: SpecialCode = {
  code: '-996',
  meaning: 'never in arrears',
  treatment: 'Points of its own bin, expected to be the safest.',
};

function entry<Name extends string>(
  column: Name,
  label: string,
  description: string,
  unit = '',
  ...specialCodes: SpecialCode[]
): ColumnEntry<Name> {
  return { column, label, description, unit, specialCodes };
}

export const columns = [
  entry('application_id', 'Application', 'Number of the application; unique'),
  entry('applied_on', 'Applied on', 'Date of the application'),
  entry(
    'channel',
    'Channel',
    'How the application came: branch, web, broker, phone, or staff (loans to employees on staff terms)',
  ),
  entry('region', 'Region', 'Region of the branch in charge'),
  entry('member_type', 'Member type', 'new, existing, or returning (a member before, with a gap)'),
  entry('age_band', 'Age band', 'Age at application in bands; protected: for fairness checks only', 'years'),
  entry('sex', 'Sex', 'As stated by the applicant; protected: for fairness checks only'),
  entry('loan_amount', 'Amount asked for', 'Amount asked for', 'euros'),
  entry('term_months', 'Term', 'Term asked for', 'months'),
  entry('purpose', 'Purpose', 'What the loan is for, as stated'),
  entry('monthly_income', 'Monthly income', 'Net income a month, as stated and, where possible, checked', 'euros'),
  entry('payment_to_income', 'Payment to income', 'Payment of the loan asked for as a share of net income', '%'),
  entry('home', 'Home', 'Residential status'),
  entry('months_at_address', 'Time at address', 'Months at the present address', 'months'),
  entry('employment', 'Employment', 'Employment status'),
  entry('months_in_job', 'Time in job', 'Months with the present employer; empty where there is none', 'months'),
  entry('dependants', 'Dependants', 'Number of dependants as stated'),
  entry('months_as_member', 'Time as member', 'Months since the present membership began', 'months', notMember),
  entry('average_balance_6m', 'Average balance', 'Average balance of the current account over six months', 'euros', notMember),
  entry('overdrawn_days_6m', 'Days overdrawn', 'Days overdrawn in the last six months', 'days', notMember),
  entry('salary_paid_in', 'Salary paid in', 'Salary arrives in an account here: yes or no'),
  entry('open_credit_lines', 'Open credit lines', 'Credit lines open at the bureau', '', noBureau),
  entry('unsecured_balance', 'Unsecured balance', 'Sum of unsecured balances at the bureau', 'euros', noBureau),
  entry('card_utilisation', 'Card utilisation', 'Balances of cards as a share of their limits', '%', noBureau, noCard),
  entry(
    'months_since_arrears',
    'Months since arrears',
    'Months since the last payment in arrears',
    'months',
    noBureau,
    neverInArrears,
  ),
  entry('worst_arrears_24m', 'Worst arrears', 'Worst number of payments in arrears over 24 months', 'payments', noBureau),
  entry('lines_in_arrears_24m', 'Lines in arrears', 'Lines with any arrears over 24 months', '', noBureau),
  entry('enquiries_6m', 'Enquiries, 6 months', 'Credit enquiries in the last 6 months', '', noBureau),
  entry('enquiries_12m', 'Enquiries, 12 months', 'Credit enquiries in the last 12 months', '', noBureau),
  entry('oldest_line_months', 'Age of oldest line', 'Months since the oldest line was opened', 'months', noBureau),
  entry('court_records_6y', 'Court records', 'Court records for debt over six years', '', noBureau),
  entry('preferred_contact', 'Preferred contact', 'How the applicant likes to be reached: post, e-mail or phone'),
  entry('statement_day', 'Statement day', 'Day of the month chosen for statements'),
  entry('form_minutes', 'Minutes on the form', 'Minutes spent on the web form; NA where there was none', 'minutes'),
  entry('currency', 'Currency', 'Currency of the application; the same throughout'),
  entry('incumbent_score', 'Incumbent score', 'Score of the scorecard in use when the application was decided', 'points'),
  entry('decision', 'Decision', 'accepted or declined'),
  entry(
    'outcome_12m',
    'Outcome after 12 months',
    'good, bad (90 or more days past due within 12 months), indeterminate (60 to 89); empty for declined',
  ),
] as const;

export type Column = (typeof columns)[number]['column'];
export type Row = Record<Column, string>;
