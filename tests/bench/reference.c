// C reference of the kernels. Reads its data from a folder, then runs what is asked on standard input, once a line, and answers
// "seconds checksum" (checksum outside the clock). Plain, careful C: flat arrays, cells, no library beyond libc.
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

static char *folder;
static double *position;
static uint8_t *element;
static uint32_t *place; // line starts (XYZ) or residues (PDB)
static int atomCount;

// Columns for a fresh table: a parse pays for its memory, as ours does.
static void freshTable(size_t room) {
  position = malloc(3 * room * sizeof(double));
  element = malloc(room);
  place = malloc(room * sizeof(uint32_t));
}

static void freeTable(void) {
  free(position);
  free(element);
  free(place);
}

static void *load(const char *name, size_t *size) {
  char path[4096];
  snprintf(path, sizeof path, "%s/%s", folder, name);
  FILE *file = fopen(path, "rb");
  if (!file) exit(2);
  fseek(file, 0, SEEK_END);
  *size = ftell(file);
  rewind(file);
  char *data = calloc(*size + 64, 1);
  if (fread(data, 1, *size, file) != *size) exit(2);
  fclose(file);
  return data;
}

static double now(void) {
  struct timespec t;
  clock_gettime(CLOCK_MONOTONIC, &t);
  return t.tv_sec + 1e-9 * t.tv_nsec;
}

static const double POWERS[] = {1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16};

// A decimal number: digits and a point; anything longer or stranger goes to strtod.
static const char *number(const char *p, double *out) {
  while (*p == ' ') p++;
  const char *start = p;
  int negative = *p == '-';
  p += negative;
  uint64_t mantissa = 0;
  const char *first = p;
  while ((unsigned)(*p - '0') < 10) mantissa = mantissa * 10 + (*p++ - '0');
  int decimals = 0;
  if (*p == '.') {
    const char *point = ++p;
    while ((unsigned)(*p - '0') < 10) mantissa = mantissa * 10 + (*p++ - '0');
    decimals = p - point;
  }
  if (p - first > 16 || (*p | 32) == 'e') {
    char *end;
    *out = strtod(start, &end);
    return end;
  }
  double value = mantissa / POWERS[decimals];
  *out = negative ? -value : value;
  return p;
}

static uint8_t symbol(char a, char b) {
  if (b > ' ') return 0;
  return a == 'H' ? 1 : a == 'O' ? 8 : a == 'C' ? 6 : a == 'N' ? 7 : 0;
}

static void parseXyz(const char *text, size_t size) {
  const char *p = text, *end = text + size;
  int declared = atoi(p);
  freshTable(declared);
  for (int k = 0; k < 2; k++) p = (const char *)memchr(p, '\n', end - p) + 1;
  int n = 0;
  while (p < end && n < declared) {
    place[n] = p - text;
    while (*p == ' ') p++;
    element[n] = symbol(p[0], p[1]);
    while (*p > ' ') p++;
    double *out = position + 3 * n++;
    p = number(number(number(p, out), out + 1), out + 2);
    while (*p != '\n') p++;
    p++;
  }
  atomCount = n;
}

static void parsePdb(const char *text, size_t size) {
  const char *p = text, *end = text + size, *residue = NULL;
  int n = 0, residues = -1;
  freshTable(size / 81 + 1);
  while (p < end) {
    const char *next = (const char *)memchr(p, '\n', end - p);
    next = next ? next + 1 : end;
    if ((!memcmp(p, "ATOM  ", 6) || !memcmp(p, "HETATM", 6)) && next - p >= 79) {
      if (!residue || memcmp(residue + 17, p + 17, 10)) residues++;
      residue = p;
      place[n] = residues;
      element[n] = symbol(p[77], ' ');
      for (int k = 0; k < 3; k++) number(p + 30 + 8 * k, position + 3 * n + k);
      n++;
    }
    p = next;
  }
  atomCount = n;
}

// Points sorted into cells; `slot` holds the point numbers, `sorted` their places, cell by cell.
typedef struct { int n[3], *start, *slot; double low[3], size, *sorted; } Grid;

static Grid sortIntoCells(const double *points, int count, double size) {
  Grid g = {.size = size};
  double high[3];
  for (int k = 0; k < 3; k++) {
    g.low[k] = INFINITY;
    high[k] = -INFINITY;
  }
  for (int i = 0; i < count; i++)
    for (int k = 0; k < 3; k++) {
      double v = points[3 * i + k];
      if (v < g.low[k]) g.low[k] = v;
      if (v > high[k]) high[k] = v;
    }
  for (int k = 0; k < 3; k++) g.n[k] = (int)((high[k] - g.low[k]) / size) + 1;
  int cells = g.n[0] * g.n[1] * g.n[2];
  int *cell = malloc(count * sizeof(int));
  g.start = calloc(cells + 2, sizeof(int));
  g.slot = malloc(count * sizeof(int));
  g.sorted = malloc(3 * count * sizeof(double));
  for (int i = 0; i < count; i++) {
    int c[3];
    for (int k = 0; k < 3; k++) c[k] = (int)((points[3 * i + k] - g.low[k]) / size);
    cell[i] = c[0] + g.n[0] * (c[1] + g.n[1] * c[2]);
    g.start[cell[i] + 2]++;
  }
  for (int c = 1; c <= cells; c++) g.start[c + 1] += g.start[c];
  for (int i = 0; i < count; i++) {
    int s = g.start[cell[i] + 1]++;
    g.slot[s] = i;
    memcpy(g.sorted + 3 * s, points + 3 * i, 24);
  }
  free(cell);
  return g;
}

static void freeGrid(Grid *g) {
  free(g->start);
  free(g->slot);
  free(g->sorted);
}

// Runs BODY for each pair of slots a < b in cells up to `reach` apart; cells along x are one run.
#define FOR_NEAR(g, reach, ...)                                                                                             \
  for (int cz = 0; cz < (g).n[2]; cz++)                                                                                     \
    for (int cy = 0; cy < (g).n[1]; cy++)                                                                                   \
      for (int cx = 0; cx < (g).n[0]; cx++) {                                                                               \
        int home = cx + (g).n[0] * (cy + (g).n[1] * cz);                                                                    \
        for (int a = (g).start[home]; a < (g).start[home + 1]; a++)                                                         \
          for (int dz = 0; dz <= reach && cz + dz < (g).n[2]; dz++)                                                         \
            for (int dy = dz ? -reach : 0; dy <= reach; dy++) {                                                             \
              if (cy + dy < 0 || cy + dy >= (g).n[1]) continue;                                                             \
              int row = (g).n[0] * (cy + dy + (g).n[1] * (cz + dz));                                                        \
              int from = cx - reach < 0 ? 0 : cx - reach, to = cx + reach >= (g).n[0] ? (g).n[0] - 1 : cx + reach;           \
              int b = dz || dy ? (g).start[row + from] : a + 1, last = (g).start[row + to + 1];                             \
              for (; b < last; b++) __VA_ARGS__                                                                             \
            }                                                                                                               \
      }

static int find(int *parent, int i) {
  while (parent[i] != i) i = parent[i] = parent[parent[i]];
  return i;
}

static double bondLimit(int z1, int z2) {
  static const double RADIUS[] = {[1] = 0.31, [6] = 0.76, [7] = 0.71, [8] = 0.66};
  return RADIUS[z1] + RADIUS[z2] + 0.4;
}

// Covalent fragments by the rule of distances; a hydrogen keeps its nearest neighbour.
static int *fragments(void) {
  const double longest = 1.92;
  Grid g = sortIntoCells(position, atomCount, longest);
  int room = 4 * atomCount, pairs = 0, *pair = malloc(2 * room * sizeof(int)), *near = malloc(atomCount * sizeof(int));
  double *length = malloc(room * sizeof(double)), *nearest = malloc(atomCount * sizeof(double));
  int *parent = malloc(atomCount * sizeof(int));
  for (int i = 0; i < atomCount; i++) {
    near[i] = -1;
    nearest[i] = INFINITY;
    parent[i] = i;
  }
  const double *s = g.sorted;
  FOR_NEAR(g, 1, {
    double x = s[3 * b] - s[3 * a], y = s[3 * b + 1] - s[3 * a + 1], z = s[3 * b + 2] - s[3 * a + 2];
    double r2 = x * x + y * y + z * z;
    if (r2 > longest * longest) continue;
    int i = g.slot[a], j = g.slot[b];
    double d = sqrt(r2);
    if (d > bondLimit(element[i], element[j]) || pairs == room) continue;
    pair[2 * pairs] = i;
    pair[2 * pairs + 1] = j;
    length[pairs++] = d;
    if (element[i] == 1 && d < nearest[i]) nearest[near[i] = j, i] = d;
    if (element[j] == 1 && d < nearest[j]) nearest[near[j] = i, j] = d;
  })
  for (int k = 0; k < pairs; k++) {
    int i = pair[2 * k], j = pair[2 * k + 1];
    if ((element[i] == 1 && near[i] != j) || (element[j] == 1 && near[j] != i)) continue;
    int a = find(parent, i), b = find(parent, j);
    if (a < b) parent[b] = a;
    else parent[a] = b;
  }
  for (int i = 0; i < atomCount; i++) parent[i] = find(parent, i);
  free(pair), free(near), free(length), free(nearest);
  freeGrid(&g);
  return parent;
}

static double dipoleSum(const double *centre, const double *dipole, int count, double cutoff) {
  Grid g = sortIntoCells(centre, count, cutoff / 2);
  double *m = malloc(3 * count * sizeof(double)), sum = 0;
  for (int s = 0; s < count; s++) memcpy(m + 3 * s, dipole + 3 * g.slot[s], 24);
  const double *s = g.sorted;
  FOR_NEAR(g, 2, {
    double x = s[3 * b] - s[3 * a], y = s[3 * b + 1] - s[3 * a + 1], z = s[3 * b + 2] - s[3 * a + 2];
    double r2 = x * x + y * y + z * z;
    if (r2 > cutoff * cutoff) continue;
    const double *p = m + 3 * a, *q = m + 3 * b;
    double pq = p[0] * q[0] + p[1] * q[1] + p[2] * q[2];
    double pr = p[0] * x + p[1] * y + p[2] * z, qr = q[0] * x + q[1] * y + q[2] * z;
    double inverse2 = 1 / r2;
    sum += (pq - 3 * pr * qr * inverse2) * inverse2 * sqrt(inverse2);
  })
  free(m);
  freeGrid(&g);
  return sum;
}

// Coulomb sum and closest contact of each pair of fragments of a list.
static double contacts(const int *pair, int pairs, const int *starts, const double *local, const double *charge,
                       const uint8_t *kind, const double *centre) {
  static double vdw2[119 * 119];
  for (int i = 1; i < 119; i++)
    for (int j = 1; j < 119; j++) vdw2[119 * i + j] = pow((i == 1 ? 1.2 : 1.52) + (j == 1 ? 1.2 : 1.52), 2);
  double total = 0;
  for (int k = 0; k < pairs; k++) {
    int f = pair[2 * k], g = pair[2 * k + 1], closest = -1;
    double dx = centre[3 * g] - centre[3 * f], dy = centre[3 * g + 1] - centre[3 * f + 1];
    double dz = centre[3 * g + 2] - centre[3 * f + 2], best = INFINITY, sum = 0;
    for (int i = starts[f]; i < starts[f + 1]; i++) {
      double x = local[3 * i] - dx, y = local[3 * i + 1] - dy, z = local[3 * i + 2] - dz;
      for (int j = starts[g]; j < starts[g + 1]; j++) {
        double a = local[3 * j] - x, b = local[3 * j + 1] - y, c = local[3 * j + 2] - z, r2 = a * a + b * b + c * c;
        sum += charge[i] * charge[j] / sqrt(r2);
        double ratio2 = r2 / vdw2[119 * kind[i] + kind[j]];
        if (ratio2 < best) {
          best = ratio2;
          closest = i;
        }
      }
    }
    total += sum + (closest >= 0 ? sqrt(best) : 0);
  }
  return total;
}

static double sumOf(const double *values, int count) {
  double sum = 0;
  for (int i = 0; i < count; i++) sum += values[i];
  return sum;
}

int main(int argc, char **argv) {
  folder = argc > 1 ? argv[1] : ".";
  size_t size, pdbSize, pairBytes = 0, fragmentBytes = 0;
  char *xyz = load("water.xyz", &size), *pdb = load("water.pdb", &pdbSize);
  int *pair = NULL, *starts = NULL;
  double *local = NULL, *charge = NULL, *centre = NULL, *dipole = NULL;
  uint8_t *kind = NULL;
  if (argc > 2) {
    size_t ignored;
    pair = load("pairs.bin", &pairBytes), starts = load("starts.bin", &fragmentBytes);
    local = load("local.bin", &ignored), charge = load("charge.bin", &ignored), kind = load("kind.bin", &ignored);
    centre = load("centre.bin", &ignored), dipole = load("dipole.bin", &ignored);
  }
  char command[64];
  while (fgets(command, sizeof command, stdin)) {
    int parses = !strncmp(command, "xyz", 3) || !strncmp(command, "pdb", 3);
    if (parses) freeTable();
    double checksum = 0, begin = now(), seconds;
    if (parses) {
      if (command[0] == 'x') parseXyz(xyz, size);
      else parsePdb(pdb, pdbSize);
      seconds = now() - begin;
      checksum = sumOf(position, 3 * atomCount);
      for (int i = 0; i < atomCount; i++) checksum += element[i];
    } else if (!strncmp(command, "fragments", 9)) {
      int *labels = fragments();
      seconds = now() - begin;
      for (int i = 0; i < atomCount; i++) checksum += labels[i];
      free(labels);
    } else if (!strncmp(command, "dipoles", 7)) {
      checksum = dipoleSum(centre, dipole, fragmentBytes / 4 - 1, 12);
      seconds = now() - begin;
    } else {
      checksum = contacts(pair, pairBytes / 8, starts, local, charge, kind, centre);
      seconds = now() - begin;
    }
    printf("%.9f %.17g\n", seconds, checksum);
    fflush(stdout);
  }
  return 0;
}
