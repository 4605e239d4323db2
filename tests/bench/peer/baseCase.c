/*
 * The base case solved by a general-purpose library for differential-algebraic equations: IDA
 * (variable-order backward differentiation) with its sparse direct solver, from state equations
 * written by hand. Shares nothing with the engine but the values of the design.
 *
 *   baseCase <relative tolerance> <periods> [highest order] < values
 *
 * Standard input: lines "name value", the design's numbers by their place ("supply.voltage 300").
 * Standard output: native doubles, per step taken: time (s), output (V), primary current (A).
 * Standard error: "user seconds, steps, residuals, Jacobians, restarts".
 *
 * Equations M y' + K y + i(y) = s. Unknowns: potentials of the rail P, the legs A and B, the
 * output, and of each section's winding ends a, b and joint J; flux linkage, primary current,
 * voltage of the series capacitor, winding currents i. The negative rail and joint 0 are earth.
 *   P    Cbus P' + Coss (2P - A - B)' + (P - V)/Rs + s(P - A) + s(P - B) = 0
 *   A    Coss (2A - P)' - s(P - A) + s(A) + ip = 0;   B likewise with -ip
 *   vs   Cs vs' = ip
 *   ip   (Ls + Lp) ip' + flux' + R ip + vs - A + B = 0
 *   flux flux' = Rc (ip - im(flux) - n sum of i)
 *   i    L i' - n flux' + Rw i + a - b = 0
 *   a    Cw (a - b)' + Ce/2 a' + Cj (2a - J - J-)' - i + d(a - J) - d(J- - a) = 0
 *   b    Cw (b - a)' + Ce/2 b' + C (2b - J - J-)' + i = 0
 *   J    C (J - b)' + Cj (J - a)' - d(a - J), + the same towards the next section, or the lead
 *   out  Cc out' + (out - J)/Rt + out/Rl = 0
 * with J- the joint below, s and d the straight-line characteristics of a switch position and a
 * diode. Nothing is smoothed: a bend is found by the library's error control, and the Jacobian
 * has the slope of the piece in force. At every gating edge y' is made consistent and the
 * integration starts afresh.
 */
#include <ida/ida.h>
#include <math.h>
#include <nvector/nvector_serial.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sunlinsol/sunlinsol_klu.h>
#include <sunmatrix/sunmatrix_sparse.h>
#include <sys/resource.h>

enum { P, A, B, VS, IP, FLUX, OUT, FIRST };
enum { MOST_SECTIONS = 48, MOST_VALUES = 600, MOST_ENTRIES = 64 * (MOST_SECTIONS + 1) };

static void fail(const char *what) {
  fprintf(stderr, "%s\n", what);
  exit(1);
}

static void *made(void *p) {
  if (!p) fail("The library could not be set up.");
  return p;
}

static void done(int flag) {
  if (flag < 0) fail("The library failed.");
}

/* Values of the design. */
static struct { char name[64]; double value; } given[MOST_VALUES];
static int givens;

static double value(const char *name) {
  for (int k = 0; k < givens; k++) if (!strcmp(given[k].name, name)) return given[k].value;
  fprintf(stderr, "No value %s.\n", name);
  exit(1);
}

static double winding(int k, const char *what) {
  char name[64];
  snprintf(name, sizeof name, "winding %d.%s", k + 1, what);
  return value(name);
}

/* Linear part, entry by entry: place in the matrix, share in M and in K. */
static int n, entries;
static struct { int row, column, at; double m, k; } entry[MOST_ENTRIES];

static void put(int row, int column, double m, double k) {
  if (row < 0 || column < 0) return;
  for (int e = 0; e < entries; e++) {
    if (entry[e].row == row && entry[e].column == column) {
      entry[e].m += m;
      entry[e].k += k;
      return;
    }
  }
  if (entries == MOST_ENTRIES) fail("Too many entries.");
  entry[entries].row = row;
  entry[entries].column = column;
  entry[entries].m = m;
  entry[entries++].k = k;
}

/* Capacitance c and conductance g between two joints; -1 is earth. */
static void join(int p, int q, double c, double g) {
  put(p, p, c, g);
  put(q, q, c, g);
  put(p, q, -c, -g);
  put(q, p, -c, -g);
}

/* One-ports with bends: current slope*u + below*min(u - low, 0) + above*max(u - high, 0). */
static int ports;
static struct port {
  int from, to, row, rowTo, at[4];
  double weight, slope, low, below, high, above;
} port[2 * MOST_SECTIONS + 5];

static struct port *bend(int from, int to) {
  struct port *p = &port[ports++];
  *p = (struct port){.from = from, .to = to, .row = from, .rowTo = to, .weight = 1,
                     .low = -INFINITY, .high = INFINITY};
  join(from, to, 0, 0);
  return p;
}

/* Rows, sorted: residuals are summed along them. */
static int first[4 * MOST_SECTIONS + FIRST + 1], column[MOST_ENTRIES];
static double mass[MOST_ENTRIES], stiff[MOST_ENTRIES], source[4 * MOST_SECTIONS + FIRST];

static int byRow(const void *x, const void *y) {
  const int *a = x, *b = y;
  return a[0] != b[0] ? a[0] - b[0] : a[1] - b[1];
}

static int find(int row, int col) {
  for (int e = 0; e < entries; e++) if (entry[e].row == row && entry[e].column == col) return entry[e].at;
  return -1;
}

static int starts[4 * MOST_SECTIONS + FIRST + 1], rows[MOST_ENTRIES];

static void lay(void) {
  qsort(entry, entries, sizeof entry[0], byRow);
  for (int e = 0; e < entries; e++) {
    first[entry[e].row + 1] = e + 1;
    column[e] = entry[e].column;
    mass[e] = entry[e].m;
    stiff[e] = entry[e].k;
    starts[entry[e].column + 1]++;
  }
  for (int j = 0; j < n; j++) starts[j + 1] += starts[j];
  int next[4 * MOST_SECTIONS + FIRST];
  memcpy(next, starts, n * sizeof(int));
  for (int e = 0; e < entries; e++) rows[entry[e].at = next[entry[e].column]++] = entry[e].row;
  for (int k = 0; k < ports; k++) {
    struct port *p = &port[k];
    const int row[2] = {p->row, p->rowTo}, col[2] = {p->from, p->to};
    for (int i = 0; i < 4; i++) p->at[i] = find(row[i / 2], col[i % 2]);
  }
}

static double across(const struct port *p, const double *y) {
  return (p->from < 0 ? 0 : y[p->from]) - (p->to < 0 ? 0 : y[p->to]);
}

static int residual(realtype t, N_Vector vy, N_Vector vdy, N_Vector vr, void *data) {
  (void)t;
  (void)data;
  const double *y = N_VGetArrayPointer(vy), *dy = N_VGetArrayPointer(vdy);
  double *r = N_VGetArrayPointer(vr);
  for (int i = 0; i < n; i++) {
    double sum = -source[i];
    for (int e = first[i]; e < first[i + 1]; e++) sum += mass[e] * dy[column[e]] + stiff[e] * y[column[e]];
    r[i] = sum;
  }
  for (int k = 0; k < ports; k++) {
    const struct port *p = &port[k];
    const double u = across(p, y);
    double i = p->slope * u;
    if (u < p->low) i += p->below * (u - p->low);
    if (u > p->high) i += p->above * (u - p->high);
    i *= p->weight;
    if (p->row >= 0) r[p->row] += i;
    if (p->rowTo >= 0) r[p->rowTo] -= i;
  }
  return 0;
}

/* cj M, and with `whole` also K and the slopes. */
static void fill(double cj, const double *y, int whole, SUNMatrix matrix) {
  double *v = SUNSparseMatrix_Data(matrix);
  sunindextype *start = SUNSparseMatrix_IndexPointers(matrix), *row = SUNSparseMatrix_IndexValues(matrix);
  for (int j = 0; j <= n; j++) start[j] = starts[j];
  for (int e = 0; e < entries; e++) {
    row[e] = rows[e];
    v[entry[e].at] = cj * mass[e] + (whole ? stiff[e] : 0);
  }
  for (int k = 0; whole && k < ports; k++) {
    const struct port *p = &port[k];
    const double u = across(p, y);
    const double g = p->weight * (p->slope + (u < p->low ? p->below : 0) + (u > p->high ? p->above : 0));
    for (int i = 0; i < 4; i++) if (p->at[i] >= 0) v[p->at[i]] += i == 0 || i == 3 ? g : -g;
  }
}

static int jacobian(realtype t, realtype cj, N_Vector y, N_Vector dy, N_Vector r, SUNMatrix matrix,
                    void *data, N_Vector a, N_Vector b, N_Vector c) {
  (void)t, (void)dy, (void)r, (void)data, (void)a, (void)b, (void)c;
  fill(cj, N_VGetArrayPointer(y), 1, matrix);
  return 0;
}

static double size[4 * MOST_SECTIONS + FIRST];

/* Build the equations; returns the switch positions' place among the one-ports. */
static int build(int sections) {
  const double v = value("supply.voltage"), turns = value("sections.ratio");
  const double cross = value("sections.ownCapacitance") - value("sections.screenCapacitance") / 6;
  const double screen = value("sections.screenCapacitance") / 2;
  const double c = value("rectifier.capacitance"), cj = value("rectifier.diodeCapacitance");
  const double coss = value("bridge.outputCapacitance"), loss = value("transformer.coreLossResistance");
  n = FIRST + 4 * sections;

  join(P, -1, value("supply.busCapacitance"), 1 / value("supply.resistance"));
  source[P] = v / value("supply.resistance");
  const int ends[4][2] = {{P, A}, {A, -1}, {P, B}, {B, -1}};
  for (int k = 0; k < 4; k++) {
    join(ends[k][0], ends[k][1], coss, 0);
    bend(ends[k][0], ends[k][1])->low = -value("bridge.diodeVoltage");
  }

  put(A, IP, 0, 1);
  put(B, IP, 0, -1);
  put(VS, VS, value("tank.seriesCapacitance"), 0);
  put(VS, IP, 0, -1);
  put(IP, IP, value("tank.seriesInductance") + value("transformer.primaryLeakage"),
      value("transformer.primaryResistance"));
  put(IP, FLUX, 1, 0);
  put(IP, VS, 0, 1);
  put(IP, A, 0, -1);
  put(IP, B, 0, 1);
  put(FLUX, FLUX, 1, 0);
  put(FLUX, IP, 0, -loss);
  struct port *core = bend(FLUX, -1);
  core->weight = loss;
  core->slope = 1 / value("transformer.magnetisingInductance");
  core->high = value("transformer.kneeFluxLinkage");
  core->low = -core->high;
  core->above = core->below = 1 / value("transformer.saturatedInductance") - core->slope;

  int below = -1;
  for (int k = 0; k < sections; k++) {
    const int a = FIRST + 4 * k, b = a + 1, joint = a + 2, i = a + 3;
    join(a, b, cross, 0);
    join(a, -1, screen, 0);
    join(b, -1, screen, 0);
    join(joint, b, c, 0);
    join(b, below, c, 0);
    const int sticks[2][2] = {{a, joint}, {below, a}};
    for (int d = 0; d < 2; d++) {
      join(sticks[d][0], sticks[d][1], cj, 0);
      struct port *p = bend(sticks[d][0], sticks[d][1]);
      p->slope = 1 / value("rectifier.diodeOffResistance");
      p->high = value("rectifier.diodeVoltage");
      p->above = 1 / value("rectifier.diodeResistance") - p->slope;
    }
    put(a, i, 0, -1);
    put(b, i, 0, 1);
    put(i, i, winding(k, "leakageInductance"), winding(k, "resistance"));
    put(i, FLUX, -turns, 0);
    put(i, a, 0, 1);
    put(i, b, 0, -1);
    put(FLUX, i, 0, loss * turns);
    size[a] = size[b] = size[joint] = v * turns;
    size[i] = 1 / turns;
    below = joint;
  }
  join(below, OUT, 0, 1 / value("output.tankResistance"));
  join(OUT, -1, value("output.cableCapacitance"), 1 / value("load.resistance"));
  size[P] = size[A] = size[B] = size[VS] = v;
  size[OUT] = v * turns * sections;
  size[IP] = 1;
  size[FLUX] = v / value("bridge.frequency") / 4;
  lay();
  return 0;
}

/* The four positions conduct by their gates: field-effect switches, a diode across each. */
static void gate(int bits) {
  for (int k = 0; k < 4; k++) {
    const double diode = 1 / value("bridge.diodeResistance");
    const double off = 1 / value("bridge.switchOffResistance");
    const int on = bits >> k & 1;
    port[k].slope = on ? 1 / value("bridge.switchResistance") : off;
    port[k].below = on ? diode : diode - off;
  }
}

int main(int argc, char **argv) {
  if (argc < 3) fail("Usage: baseCase <relative tolerance> <periods> [highest order] < values");
  const double tolerance = atof(argv[1]);
  const int periods = atoi(argv[2]), order = argc > 3 ? atoi(argv[3]) : 5;
  while (givens < MOST_VALUES &&
         scanf(" %63[^\t]\t%lf", given[givens].name, &given[givens].value) == 2) givens++;
  const int sections = (int)value("sections.count");
  if (sections < 1 || sections > MOST_SECTIONS) fail("Too many sections.");
  build(sections);

  SUNContext context;
  if (SUNContext_Create(NULL, &context)) fail("No context.");
  N_Vector y = made(N_VNew_Serial(n, context)), dy = made(N_VNew_Serial(n, context));
  N_Vector absolute = made(N_VNew_Serial(n, context)), r = made(N_VNew_Serial(n, context));
  SUNMatrix matrix = made(SUNSparseMatrix(n, n, entries, CSC_MAT, context));
  SUNMatrix masses = made(SUNSparseMatrix(n, n, entries, CSC_MAT, context));
  SUNLinearSolver solver = made(SUNLinSol_KLU(y, matrix, context));
  SUNLinearSolver massSolver = made(SUNLinSol_KLU(y, masses, context));
  N_VConst(0, y);
  N_VConst(0, dy);
  double *state = N_VGetArrayPointer(y);
  state[P] = value("supply.voltage");
  /* Charge is shared at once: each leg sits half way between two equal capacitances. */
  state[A] = state[B] = state[P] / 2;
  for (int i = 0; i < n; i++) N_VGetArrayPointer(absolute)[i] = tolerance * size[i];
  fill(1, state, 0, masses);
  if (SUNLinSolInitialize(massSolver) || SUNLinSolSetup(massSolver, masses)) fail("Singular masses.");

  void *ida = made(IDACreate(context));
  done(IDAInit(ida, residual, 0, y, dy));
  done(IDASVtolerances(ida, tolerance, absolute));
  done(IDASetLinearSolver(ida, solver, matrix));
  done(IDASetJacFn(ida, jacobian));
  done(IDASetMaxOrd(ida, order));
  done(IDASetMaxNumSteps(ida, 10000000));

  const double period = 1 / value("bridge.frequency"), dead = value("bridge.deadTime");
  const double edge[] = {0, dead, period / 2, period / 2 + dead, period};
  const int bits[] = {0, 1 | 8, 0, 2 | 4};
  size_t room = 1 << 16, used = 0;
  double *record = made(malloc(room * sizeof(double)));
  long steps = 0, residuals = 0, jacobians = 0, restarts = 0;
  struct rusage before, after;
  getrusage(RUSAGE_SELF, &before);
  for (int p = 0; p < periods; p++) {
    for (int k = 0; k < 4; k++) {
      double t = p * period + edge[k];
      const double end = k == 3 ? (p + 1) * period : p * period + edge[k + 1];
      gate(bits[k]);
      /* y' at the edge: M y' = s - K y - i(y). */
      N_VConst(0, dy);
      residual(t, y, dy, r, NULL);
      N_VScale(-1, r, r);
      if (SUNLinSolSolve(massSolver, masses, dy, r, 0)) fail("Singular masses.");
      done(IDAReInit(ida, t, y, dy));
      done(IDASetStopTime(ida, end));
      restarts++;
      for (int flag = IDA_SUCCESS; flag != IDA_TSTOP_RETURN;) {
        flag = IDASolve(ida, end, &t, y, dy, IDA_ONE_STEP);
        done(flag);
        if (used + 3 > room) record = made(realloc(record, (room *= 2) * sizeof(double)));
        record[used++] = t;
        record[used++] = state[OUT];
        record[used++] = state[IP];
      }
      long count;
      IDAGetNumSteps(ida, &count);
      steps += count;
      IDAGetNumResEvals(ida, &count);
      residuals += count;
      IDAGetNumJacEvals(ida, &count);
      jacobians += count;
    }
  }
  getrusage(RUSAGE_SELF, &after);
  const double seconds = (after.ru_utime.tv_sec - before.ru_utime.tv_sec) +
                         1e-6 * (after.ru_utime.tv_usec - before.ru_utime.tv_usec);
  fwrite(record, sizeof(double), used, stdout);
  fprintf(stderr, "%.6f %ld %ld %ld %ld\n", seconds, steps, residuals, jacobians, restarts);
  return 0;
}
