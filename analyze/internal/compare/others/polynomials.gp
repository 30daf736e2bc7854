\\ Determinants and roots by PARI/GP, one problem: the shell sets NAME,
\\ POLYNOMIAL and, where there is one, PENCIL. Writes "det NAME METHOD µs c0 c1 …" and "roots NAME METHOD µs re im …".
default(parisizemax, 2^31);
\\ Microseconds of processor time: the best of batches of about 100 ms (the
\\ clock ticks in ms). Nothing is reported of what takes longer than 20 s.
timed(f) = {
  my(t, r, count = 1, least = oo);
  gettime(); r = alarm(20, f()); t = gettime();
  if (type(r) == "t_ERROR", return([0, 0]));
  if (t < 100, count = ceil(100 / max(t, 1/20)));
  if (t > 1000, return([t * 1000., r]));
  for (batch = 1, 8,
    gettime(); for (k = 1, count, f()); least = min(least, gettime() / count));
  [least * 1000., r];
}

slow(method) = extern(strprintf("echo 'left out: PARI %s of %s takes longer than 20 s' >&2; echo 0", method, getenv("NAME")));

report(method, f) = {
  my(m = timed(f), v);
  if (m[1] == 0, slow(method); return);
  v = Vecrev(m[2], n + 1);
  print1("det ", getenv("NAME"), " ", method, " ", strprintf("%.3f", m[1]));
  for (i = 1, #v, print1(" ", v[i]));
  print();
}

{ if (getenv("PENCIL"),
  lines = [strsplit(l, " ") | l <- readstr(getenv("PENCIL"))];
  n = eval(lines[1][1]);
  G = matrix(n, n); C = matrix(n, n);
  for (k = 2, #lines, my(l = lines[k], i = eval(l[1]) + 1, j = eval(l[2]) + 1); G[i, j] = eval(l[3]); C[i, j] = eval(l[4]));
  M = G + 's * C;
  report("matdet(,1)", () -> matdet(M, 1));
  report("interpolation", () -> polinterpolate([0 .. n], vector(n + 1, k, matdet(G + (k - 1) * C)), 's));
  A = -matsolve(C, G); d = matdet(C);
  report("charpoly", () -> d * charpoly(A, 's))); }

c = [eval(l) | l <- readstr(getenv("POLYNOMIAL"))[2 .. -1]];
p = Polrev(c, 's);
m = timed(() -> polroots(p));
{ if (m[1] == 0, slow("polroots"),
  print1("roots ", getenv("NAME"), " polroots ", strprintf("%.3f", m[1]));
  for (k = 1, #m[2], my(z = m[2][k]); print1(" ", strprintf("%.18g", real(z)), " ", strprintf("%.18g", imag(z))));
  print()); }
quit;
