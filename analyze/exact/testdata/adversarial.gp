\\ Reference determinants of pencils G + s*C that are hard on arithmetic: near
\\ cancellation, numbers over 600 decades, degree 400.
\\ Made with PARI/GP 2.15.2 by: gp -q adversarial.gp > adversarial.txt
\\
\\ Lines as in determinants.gp, and
\\         build KIND SIZE            a case: the ladder or mesh of networks_test.go
\\         modulo P C0 C1 ...         coefficients of det(G+s*C) times SCALE modulo P,
\\         scale SCALE                the product of the rows' common denominators
default(parisizemax, 2^32);

coefficients(p) = { my(v = Vecrev(p)); if (#v == 0, v = [0]); for (i = 1, #v, print1(" ", v[i])); print(); }

report(name, G, C, solutions) = {
  my(n = matsize(G)[1], M = G + 's * C, x, B);
  print("pencil ", name, " ", n);
  for (i = 1, n, for (j = 1, n, if (G[i,j] || C[i,j], print("entry ", i-1, " ", j-1, " ", G[i,j], " ", C[i,j]))));
  print1("det"); coefficients(matdet(M));
  forvec (v = [[1, n], [1, n]],
    if ((v[1] + 2 * v[2]) % 7 == 0,
      B = matrix(n-1, n-1, i, j, M[i + (i >= v[2]), j + (j >= v[1])]);
      print1("adj ", v[1]-1, " ", v[2]-1); coefficients((-1)^(v[1]+v[2]) * matdet(B))));
  for (k = 1, #solutions,
    x = matsolve(subst(M, 's, solutions[k]), vectorv(n, i, i == (k-1)%n + 1));
    print1("solve ", real(solutions[k]), " ", imag(solutions[k]), " ", (k-1)%n);
    for (i = 1, n, print1(" ", real(x[i]), " ", imag(x[i])));
    print());
}

setrand(4711);
wide() = 10^(random(601) - 300) * (random(199) - 99) / (1 + random(99));
for (n = 3, 4, report(Str("decades", n), matrix(n, n, i, j, wide()), matrix(n, n, i, j, wide()), [10^150, 10^-200 * I][1 .. 2*(n == 3)]));

\\ Hilbert matrices are nearly singular; their difference more so.
hilbertian(n, k) = matrix(n, n, i, j, 1 / (i + j + k));
report("hilbert", hilbertian(7, -1), hilbertian(7, -1) - hilbertian(7, 0), [-1 + 10^-30]);

\\ Singular for every s but for one part in 10^200.
twin(n, e) = { my(M = matrix(n, n, i, j, (3*i + 5*j + i*j) % 11 - 5)); M[n, ] = M[1, ] + M[2, ]; M[n, n] += e; M; }
report("near-singular", twin(6, 10^-200), twin(6, -10^-200), [2, 1/3]);

\\ A measuring bridge out of balance by one part in 10^60, with stray capacitance.
bridge(e) = {
  my(g = [1/100, 1/1000, 1/120, 1/1200 * (1 + e)], G, C);
  G = [g[1]+g[3]+1/50, -g[1], -g[3]; -g[1], g[1]+g[2]+1/10^6, -1/10^6; -g[3], -1/10^6, g[3]+g[4]+1/10^6];
  C = [0, 0, 0; 0, 10^-12, 0; 0, 0, 10^-12*(1 + e)];
  report("bridge", G, C, [10^6 * I]);
}
bridge(10^-60);

\\ Roots -1 ... -12 hidden by a change of basis: Wilkinson's polynomial.
hidden(n) = { my(L = matrix(n, n, i, j, if (i >= j, ((7*i + 3*j) % 5) - 2 + 3*(i == j), 0)), U = L~ + matid(n)); report("wilkinson", L * matdiagonal([1..n]) * U, L * U, [-13/2]); }
hidden(12);

\\ Degree 400, modulo primes: values at 0 ... 400 by elimination modulo p, then
\\ interpolation.
preferred = [10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82];
decimal(k, e) = preferred[k % 12 + 1] * 10^e;
ladder(n) = {
  my(G = matrix(2*n, 2*n), C = matrix(2*n, 2*n));
  for (k = 0, n-1, my(i = 2*k+1, v = 2*k+2);
    if (k > 0, G[i, v-2] = 1);
    G[i, v] = -1; G[i, i] = -decimal(k, 0); C[i, i] = -decimal(k+5, -4);
    G[v, i] = 1; if (k+1 < n, G[v, i+2] = -1);
    C[v, v] = -decimal(k+2, -9));
  [G, C];
}
mesh(k) = {
  my(n = k^2, G = matrix(n, n), C = matrix(n, n), count = 1, a, b, g);
  G[1, 1] = 1/decimal(1, 2);
  for (y = 0, k-1, for (x = 0, k-1, a = y*k + x + 1;
    for (way = 1, 2, if ([x, y][way] + 1 < k,
      b = a + [1, k][way]; count++; g = 1/decimal(count, 2);
      G[a,a] += g; G[b,b] += g; G[a,b] -= g; G[b,a] -= g));
    C[a, a] = decimal(a - 1 + 7, -9)));
  [G, C];
}
modulo(kind, size, M, primes) = {
  my(G = M[1], C = M[2], n = matsize(G)[1], scale = 1, d, v);
  for (i = 1, n, d = lcm(denominator(G[i,]), denominator(C[i,])); G[i,] *= d; C[i,] *= d; scale *= d);
  print("build ", kind, " ", size); print("scale ", scale);
  for (k = 1, #primes, my(p = primes[k]);
    v = vector(n + 1, x, lift(matdet(Mod(1, p) * (G + (x-1) * C))));
    print1("modulo ", p); v = lift(polinterpolate([0 .. n] * Mod(1, p), v * Mod(1, p), 's)); coefficients(v));
}
modulo("ladder", 200, ladder(200), [2^61 - 1, 10^15 + 37]);
modulo("mesh", 20, mesh(20), [10^15 + 37]);
quit;
