/* Hand-written baseline: a genetic oscillator of 16 reactions (Vilar, Kueh, Barkai & Leibler 2002). */
#include "baseline.h"

static uint64_t replicate(generator *g, double horizon, int intervals, int *grid) {
  const double alphaA = 50, alphaA1 = 500, alphaR = 0.01, alphaR1 = 50, betaA = 50, betaR = 5, deltaMA = 10, deltaMR = 0.5,
               deltaA = 1, deltaR = 0.2, gammaA = 1, gammaR = 1, gammaC = 2, thetaA = 50, thetaR = 100;
  int DA = 1, DA1 = 0, DR = 1, DR1 = 0, MA = 0, MR = 0, A = 0, R = 0, C = 0;
  double t = 0;
  int point = 0;
  double next = 0;
  uint64_t events = 0;
  for (;;) {
    const double p1 = gammaA * DA * A, p2 = p1 + thetaA * DA1, p3 = p2 + gammaR * DR * A, p4 = p3 + thetaR * DR1,
                 p5 = p4 + alphaA * DA, p6 = p5 + alphaA1 * DA1, p7 = p6 + alphaR * DR, p8 = p7 + alphaR1 * DR1,
                 p9 = p8 + betaA * MA, p10 = p9 + betaR * MR, p11 = p10 + gammaC * A * R, p12 = p11 + deltaA * C,
                 p13 = p12 + deltaMA * MA, p14 = p13 + deltaMR * MR, p15 = p14 + deltaA * A, total = p15 + deltaR * R;
    t -= log(uniform_above_zero(g)) / total;
    while (next < t) {
      int *row = grid + 9 * point;
      row[0] = DA, row[1] = DA1, row[2] = DR, row[3] = DR1, row[4] = MA, row[5] = MR, row[6] = A, row[7] = R, row[8] = C;
      if (point == intervals) return events;
      point++;
      next = point * horizon / intervals;
    }
    const double u = uniform_below_one(g) * total;
    if (u < p8) {
      if (u < p4) {
        if (u < p1) DA--, A--, DA1++;
        else if (u < p2) DA++, A++, DA1--;
        else if (u < p3) DR--, A--, DR1++;
        else DR++, A++, DR1--;
      } else if (u < p6) MA++;
      else MR++;
    } else if (u < p12) {
      if (u < p9) A++;
      else if (u < p10) R++;
      else if (u < p11) A--, R--, C++;
      else C--, R++;
    } else if (u < p13) MA--;
    else if (u < p14) MR--;
    else if (u < p15) A--;
    else R--;
    events++;
  }
}

int main(int argc, char **argv) { return run_baseline(argc, argv, 9); }
