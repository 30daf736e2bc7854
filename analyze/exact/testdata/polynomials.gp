\\ Reference answers about polynomials.
\\ Made with PARI/GP 2.15.2 by: gp -q polynomials.gp > polynomials.txt
\\
\\ Lines:  poly NAME C0 C1 ...        a polynomial, coefficients ascending
\\         roots LO HI COUNT          distinct real roots in [LO, HI]; - is infinite
\\         real LO HI                 rational bounds of one real root, in order
\\         factor MULT C0 C1 ...      square-free factor, primitive, positive leading coefficient
\\         gcd D0 ... / G0 ...        another polynomial D and the primitive gcd G
default(parisizemax, 2^31);
default(realprecision, 60);

coefficients(p) = { my(v = Vecrev(p)); for (i = 1, #v, print1(" ", v[i])); }
primitive(p) = { p = p / content(p); if (pollead(p) < 0, p = -p); p; }

distinct(p, lo, hi) = {
  my(q = p / gcd(p, p'));
  polsturm(q, [lo, hi]);
}

report(name, p, ranges, others) = {
  print1("poly ", name); coefficients(p); print();
  for (k = 1, #ranges,
    my(lo = ranges[k][1], hi = ranges[k][2]);
    print("roots ", if (lo == -oo, "-", lo), " ", if (hi == oo, "-", hi), " ", distinct(p, lo, hi)));
  my(q = p / gcd(p, p'), r = polrootsreal(q), w = 10^-40);
  for (k = 1, #r,
    my(a = floor(r[k] * 10^40) / 10^40);
    print("real ", a - 10^-40, " ", a + 2 * 10^-40));
  my(f = factor(p), m);
  m = if (#f~ == 0, 0, vecmax(f[, 2]));
  for (k = 1, m,
    my(g = 1);
    for (i = 1, #f~, if (f[i, 2] == k, g *= f[i, 1]));
    if (poldegree(g) > 0, print1("factor ", k); coefficients(primitive(g)); print()));
  for (k = 1, #others,
    print1("gcd"); coefficients(others[k]); print1(" /"); coefficients(primitive(gcd(p, others[k]))); print());
}

w = prod(k = 1, 12, x - k);
report("wilkinson", w, [[-oo, oo], [1, 12], [3/2, 12], [0, 4]], [w', x^2 - 3*x + 2]);
report("chebyshev", polchebyshev(16), [[-oo, oo], [0, oo], [-1/2, 1/2]], [polchebyshev(12), polchebyshev(48)]);
report("laguerre", 10! * pollaguerre(10), [[-oo, oo], [0, 5]], [x^2 + 1]);
report("mignotte", x^15 - 2*(100*x - 1)^2, [[-oo, oo], [0, 1/100], [1/100, 1]], [100*x - 1]);
report("repeated", (x - 1)^3 * (x^2 - 2)^2 * (3*x + 5) * (x^2 + x + 1)^4, [[-oo, oo], [-2, 1], [1, 1], [0, 2]], [(x - 1)^2 * (x^2 - 2), (x^2 + x + 1)^2 * (x + 7)^3]);
report("spread", prod(k = -3, 3, 10^(4*abs(k)) * x - 10^(2*k*(k > 0)) * (k + 5)), [[-oo, oo], [0, 1/10^6], [1, oo]], []);
report("noroots", (x^2 + 1)^2 * (x^4 + x^2 + 7), [[-oo, oo], [0, 1]], [x^4 - 1]);
report("rational", (x/3 - 2/7) * (x - 1/2^60) * (x - 2/2^60), [[-oo, oo], [0, 3/2^61]], [x^2 - x/2^60]);
