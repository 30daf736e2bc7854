\\ Reference determinants, adjugate entries and solutions of pencils G + s*C.
\\ Made with PARI/GP 2.15.2 by: gp -q determinants.gp > determinants.txt
\\
\\ Lines:  pencil NAME SIZE          begins a case
\\         entry ROW COL G C         an entry, rows and columns from 0
\\         det C0 C1 ...             coefficients of det(G+s*C), ascending
\\         adj ROW COL C0 C1 ...     coefficients of adj(G+s*C)[ROW, COL]
\\         solve RE IM K X0 Y0 ...   solution x+i*y at s=RE+i*IM for unit vector K
default(parisizemax, 2^31);

coefficients(p) = { my(v = Vecrev(p)); if (#v == 0, v = [0]); for (i = 1, #v, print1(" ", v[i])); print(); }

report(name, G, C, solutions) = {
  my(n = matsize(G)[1], M = G + 's * C, d, x, B);
  print("pencil ", name, " ", n);
  for (i = 1, n, for (j = 1, n, if (G[i,j] || C[i,j], print("entry ", i-1, " ", j-1, " ", G[i,j], " ", C[i,j]))));
  d = matdet(M); print1("det"); coefficients(d);
  forvec (v = [[1, n], [1, n]],
    if ((v[1] + 2 * v[2]) % 5 == 0 && n > 1,
      B = matrix(n-1, n-1, i, j, M[i + (i >= v[2]), j + (j >= v[1])]);
      print1("adj ", v[1]-1, " ", v[2]-1); coefficients((-1)^(v[1]+v[2]) * matdet(B))));
  for (k = 1, #solutions,
    x = matsolve(subst(M, 's, solutions[k]), vectorv(n, i, i == (k-1)%n + 1));
    print1("solve ", real(solutions[k]), " ", imag(solutions[k]), " ", (k-1)%n);
    for (i = 1, n, print1(" ", real(x[i]), " ", imag(x[i])));
    print());
}

\\ Sparse pencils with random rationals; the second kind has long ones.
sparse(n, size, density) = { my(M = matrix(n, n, i, j, if (random(100) < density, (random(2*size) - size) / (1 + random(size)), 0))); M; }
setrand(20250117);
for (n = 1, 7, report(Str("sparse", n), sparse(n, 50, 60), sparse(n, 50, 40), [1/3, 2*I/7]));
for (n = 3, 5, report(Str("long", n), sparse(n, 10^60, 70), sparse(n, 10^60, 50), []));
report("singular", [1, 2, 3; 2, 4, 6; 0, 1, 5], [1, 0, 1; 2, 0, 2; 3, 1, 0], []);

\\ The wave filter of an instrument cable: a ladder of R and L in series and C across.
cable(n) = {
  my(G = matrix(2*n, 2*n), C = matrix(2*n, 2*n));
  for (k = 1, n,
    my(i = 2*k-1, v = 2*k);
    if (k > 1, G[i, v-2] = 1);
    G[i, v] = -1; G[i, i] = -(10 + k)/10; C[i, i] = -(47 + 3*k)/10^5;
    G[v, i] = 1; if (k < n, G[v, i+2] = -1);
    C[v, v] = -(33 + 7*k)/10^9);
  report(Str("cable", n), G, C, [1000*I, -500 + 20000*I]);
}
cable(2); cable(6); cable(9);

\\ A membrane: square grid of conductances with a capacitance at every node.
membrane(k) = {
  my(n = k^2, G = matrix(n, n), C = matrix(n, n), a, g);
  G[1, 1] = 1/50;
  for (y = 0, k-1, for (x = 0, k-1,
    a = y*k + x + 1; C[a, a] = (10 + a)/10^8;
    if (x < k-1, g = 1/(100 + 3*a); G[a,a] += g; G[a+1,a+1] += g; G[a,a+1] -= g; G[a+1,a] -= g);
    if (y < k-1, g = 1/(220 + 7*a); G[a,a] += g; G[a+k,a+k] += g; G[a,a+k] -= g; G[a+k,a] -= g)));
  report(Str("membrane", k), G, C, [100000*I]);
}
membrane(2); membrane(3);

\\ Three stages of which each reads the one before: block triangular.
stages() = {
  my(G = matrix(9, 9), C = matrix(9, 9));
  for (k = 0, 2, for (i = 1, 3, for (j = 1, 3, G[3*k+i, 3*k+j] = (7*i + 3*j + k) % 5 - 2; C[3*k+i, 3*k+j] = ((i + 2*j) % 3) / (k + 1))));
  G[4, 2] = 3; G[8, 5] = -1/2; C[7, 1] = 5;
  report("stages", G, C, [3/2 + I]);
}
stages();
