# Fine classes of invented values by base R: quantiles of type 7, the classes that cut() makes of given edges, closed at either side, their WOE and
# information value, and between which two values the fine classes of libs/numeric must be parted. Debian's r-base-core.
#
#   Rscript tests/reference/generators/fine_classes.R > tests/reference/expected/fine_classes.json
options(digits = 17)
RNGkind("Mersenne-Twister", "Inversion", "Rejection")
set.seed(20261202)

number <- function(x) paste0("[", paste(formatC(x, digits = 17, format = "g", width = 1), collapse = ","), "]")
probabilities <- c(0, 0.01, 0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95, 0.99, 1)

samples <- list(
  `two decimals` = round(rlnorm(400, 3, 1), 2),
  `many ties` = as.numeric(rpois(500, 3)),
  `below and above zero` = round(rnorm(300, 0, 250), 1),
  `one value` = rep(7, 20),
  `fewer values than classes` = sample(c(1.5, 2.5, 10), 60, replace = TRUE)
)

# Where runs of equal values start, in rows from 0: the first has nothing below it.
starts_of <- function(x) {
  runs <- rle(sort(x))
  list(start = cumsum(c(0, runs$lengths))[seq_along(runs$values)][-1], below = runs$values[-length(runs$values)], value = runs$values[-1])
}

# The run whose start is nearest to each quantile k n / classes; of two equally near ones the later.
parted <- function(x, classes) {
  runs <- starts_of(x)
  if (length(runs$start) == 0) return(list(below = numeric(0), value = numeric(0)))
  if (length(runs$start) < classes) return(runs)
  nearest <- sapply(seq_len(classes - 1), function(k) {
    away <- abs(runs$start - length(x) * k / classes)
    max(which(away == min(away)))
  })
  nearest <- unique(nearest)
  list(below = runs$below[nearest], value = runs$value[nearest])
}

one <- function(name, x) {
  bad <- rbinom(length(x), 1, plogis(-1 + 0.4 * as.numeric(scale(rank(x) + (length(unique(x)) == 1) * seq_along(x)))))
  edges <- unique(as.numeric(quantile(x, c(0.2, 0.4, 0.6, 0.8), type = 7)))
  table_of <- function(right) {
    # Outermost edges are infinite, so that every value has a class.
    class <- cut(x, c(-Inf, edges, Inf), right = right)
    goods <- as.numeric(table(class[bad == 0]))
    bads <- as.numeric(table(class[bad == 1]))
    smoothing <- if (any((goods == 0 | bads == 0) & goods + bads > 0)) 0.5 else 0
    kept <- goods + bads > 0
    g <- (goods[kept] + smoothing) / (sum(goods) + smoothing * sum(kept))
    b <- (bads[kept] + smoothing) / (sum(bads) + smoothing * sum(kept))
    woe <- rep(0, length(goods))
    woe[kept] <- log(g / b)
    sprintf('{"goods":%s,"bads":%s,"woe":%s,"informationValue":%s}', number(goods), number(bads), number(woe),
            formatC(sum((g - b) * log(g / b)), digits = 17, format = "g"))
  }
  classes <- sapply(c(2, 5, 20, 100), function(count) {
    found <- parted(x, count)
    sprintf('{"count":%d,"below":%s,"value":%s}', count, number(found$below), number(found$value))
  })
  sprintf('{"name":"%s","values":%s,"bad":%s,"quantiles":%s,"edges":%s,"left":%s,"right":%s,"fine":[%s]}', name, number(x), number(bad),
          number(quantile(x, probabilities, type = 7)), number(edges), table_of(FALSE), table_of(TRUE), paste(classes, collapse = ","))
}

# An empty vector is an empty list.
text <- paste(mapply(one, names(samples), samples), collapse = ",\n")
cat(sprintf('{"source":"%s, base: quantile(type = 7), cut, table","probabilities":%s,"samples":[\n%s\n]}\n', R.version.string, number(probabilities), gsub("\\[\\s*\\]", "[]", text)))
