// The notation as far as colours need it, for editors that take them from
// tree-sitter. Lines are read loosely: whatever is typed, the words around it
// keep their colours. What names mean is the server's to say.
// `tree-sitter generate` (0.22) makes src/ of this file.

const factor = /((da|[qryzafpnuµμmcdhkMGTPEZYRQ])?(ohm|Ω|Ω|Wb|Hz|rad|[VASHFWJCs])|deg|°|%|ppm|dB(V|u|[uµμ]V)?)(\^[-−]?[0-9]+)?/.source;
// Behind a star no lone s is a unit here: it begins sin, sqrt and settle.
const starred = /((da|[qryzafpnuµμmcdhkMGTPEZYRQ])?(ohm|Ω|Ω|Wb|Hz|rad|[VASHFWJC])|[qryzafpnuµμmcdhkMGTPEZYRQ]s)(\^[-−]?[0-9]+)?/.source;
const kinds = ["resistor", "inductor", "capacitor", "impedance", "admittance", "transformer", "coupling", "switch", "wire",
  /voltage[ \t]+source/, /current[ \t]+source/, /op[ \t]+amp/];
const heads = ["ground", "let", "port", "function", "tell", "require", "start", "prefer", "allow", "use", "subnetwork", "part"];
const words = ["at", "before", "from", "to", "in", "with", "without", "because", "reference", "of", "open", "closed", "nominal",
  "opens", "closes", "ideal", "rated", "initially", "gain", "resistance", "between", "primary", "secondary", "output",
  "initial", "poles", "zeros", "matrix", "rest", "steady"];

module.exports = grammar({
  name: "portlight",
  extras: () => [/[ \t\r\u00a0\u2009\u202f]/],
  word: ($) => $.name,

  rules: {
    file: ($) => repeat(seq(optional($._line), "\n")),

    _line: ($) => choice($.path, alias($._named_path, $.path), $.statement, $._loose, seq($.part, repeat($._token)), $.documentation, $.comment),
    // A line that no keyword begins is a path, or one that is being typed.
    path: ($) => prec.right(seq(field("first", $.node), repeat($._token))),
    node: ($) => choice($.name, $.digits, $.number, ...words),
    statement: ($) => prec.right(seq($.head, optional(seq($._other, repeat($._token))))),
    // A node may be called like a statement: port -[R1]- tell.
    _named_path: ($) => seq(field("first", alias($._head_node, $.node)), $.open, repeat($._token)),
    _head_node: () => choice(...heads),
    head: () => choice(...heads),
    _loose: ($) => seq(choice($.close, $.mark, $.string), repeat($._token)),

    _token: ($) => choice($._other, $.open),
    _other: ($) => choice($.part, $.kind, $.use, $.call, $.subscript, $.quantity, $.digits, $.name, $.word, $.string,
      $.close, $.mark, $.documentation, $.comment),
    part: ($) => prec(1, seq($.kind, field("name", $.name))),
    kind: () => choice(...kinds),
    use: ($) => prec.right(seq("part", optional(field("name", $.name)))),
    call: ($) => prec(1, seq(field("name", $.name), token.immediate("("))),
    subscript: ($) => seq(field("letter", $.name), token.immediate("["), optional(token.immediate(/[^\]#\n]*\]/))),
    quantity: ($) => prec.right(seq($.number, optional($.unit))),
    number: () => /([0-9]+(\.[0-9]+)?|\.[0-9]+)([eE][-+−]?[0-9]+)?/,
    unit: () => token.immediate(new RegExp(` ?(1/)?${factor}(/${factor}|\\*${starred})*`)),
    digits: () => /[0-9]+[\p{L}_][\p{L}0-9_]*/,
    word: () => choice(...words),
    name: () => /[\p{L}_][\p{L}0-9_]*/,
    string: () => /"[^"\n]*"?/,
    open: () => /\]?[-−]\[/,
    close: () => /\]([-−])?/,
    mark: () => /\|\||<=|>=|[-+−±*\/^=<>:,.(){}|]/,
    documentation: () => /##[^\n]*/,
    comment: () => /#[^\n]*/,
  },
});
