# The operator language: one statement, as tokens (grammar/lexer.ts), to plain nodes (grammar/syntax.ts).
# Conventions: every rule builds one node or one list; lists are left recursive; names, kinds and sizes are judged
# later (shared/language). Literals are compared with a token's text, %types with its type. One parse, always.
@preprocessor typescript
@{%
import { lexer } from './lexer.ts';
import * as n from './nodes.ts';
%}
@lexer lexer

statement ->
    lattice {% n.first %} | custom {% n.first %} | spins {% n.first %} | couplings {% n.first %}
  | definition {% n.first %} | law {% n.first %} | rule {% n.first %} | reference {% n.first %}
  | map {% n.first %} | audit {% n.first %}

# ------------------------------------------------------------------ lattice
lattice ->
    "lattice" %word sizes {% ([k, family, size]) => ({ type: 'lattice', family: n.word(family), boundary: undefined, size, ...n.span(k, size.at(-1)) }) %}
  | "lattice" %word %word sizes {% ([k, family, boundary, size]) => ({ type: 'lattice', family: n.word(family), boundary: n.word(boundary), size, ...n.span(k, size.at(-1)) }) %}
custom -> "lattice" "custom" customLines {% ([k, , lines]) => ({ type: 'custom lattice', lines, ...n.span(k, lines.at(-1)) }) %}
customLines -> %rule customLine {% ([, line]) => n.list(line) %} | customLines %rule customLine {% ([all, , line]) => n.more(all, line) %}
customLine ->
    "cell" vectors {% ([k, vectors]) => ({ type: 'cell', vectors: vectors.map((v: { entries: unknown }) => v.entries), ...n.span(k, vectors.at(-1)) }) %}
  | "vertex" label "at" vector {% ([k, label, , v]) => ({ type: 'vertex', label, position: v.entries, ...n.span(k, v) }) %}
  | "link" customCell "--" customCell {% ([k, a, , b]) => ({ type: 'link', label: undefined, a, b, ...n.span(k, b) }) %}
  | "link" label ":" customCell "--" customCell {% ([k, label, , a, , b]) => ({ type: 'link', label, a, b, ...n.span(k, b) }) %}
  | "plaquette" customCells {% ([k, parts]) => ({ type: 'plaquette', label: undefined, parts, ...n.span(k, parts.at(-1)) }) %}
  | "plaquette" label ":" customCells {% ([k, label, , parts]) => ({ type: 'plaquette', label, parts, ...n.span(k, parts.at(-1)) }) %}
  | "cube" customCells {% ([k, parts]) => ({ type: 'cube', label: undefined, parts, ...n.span(k, parts.at(-1)) }) %}
  | "cube" label ":" customCells {% ([k, label, , parts]) => ({ type: 'cube', label, parts, ...n.span(k, parts.at(-1)) }) %}
  | "size" sizes {% ([k, size]) => ({ type: 'size', size, boundary: undefined, ...n.span(k, size.at(-1)) }) %}
  | "size" sizes %word {% ([k, size, b]) => ({ type: 'size', size, boundary: n.word(b), ...n.span(k, b) }) %}
  | "size" %word sizes {% ([k, b, size]) => ({ type: 'size', size, boundary: n.word(b), ...n.span(k, size.at(-1)) }) %}
vectors -> vector {% ([v]) => n.list(v) %} | vectors "," vector {% ([all, , v]) => n.more(all, v) %}
vector -> "(" items ")" {% ([open, entries, close]) => ({ entries, ...n.span(open, close) }) %}
items -> expression {% ([e]) => n.list(e) %} | items "," expression {% ([all, , e]) => n.more(all, e) %}
label -> %word {% ([t]) => n.word(t) %} | %number {% ([t]) => n.word(t) %}
customCells -> customCell {% ([c]) => n.list(c) %} | customCells "," customCell {% ([all, , c]) => n.more(all, c) %}
customCell ->
    label {% ([l]) => ({ label: l, shift: undefined, ...n.span(l, l) }) %}
  | label "+" row {% ([l, , r]) => ({ label: l, shift: r.row, ...n.span(l, r) }) %}
  | label "-" row {% ([l, , r]) => ({ label: l, shift: r.row.map((x: number) => -x), ...n.span(l, r) }) %}

# ------------------------------------------------------------------ sizes
sizes -> size {% ([s]) => n.list(s) %} | sizes "," size {% ([all, , s]) => n.more(all, s) %}
size -> counts {% n.first %} | row {% n.first %}
counts ->
    %number {% ([t]) => ({ type: 'counts', counts: [n.integer(t)], ...n.span(t, t) }) %}
  | counts times %number {% ([c, , t]) => ({ type: 'counts', counts: [...c.counts, n.integer(t)], ...n.span(c, t) }) %}
times -> "x" {% n.first %} | "*" {% n.first %}
row -> "(" integers ")" {% ([open, row, close]) => ({ type: 'row', row, ...n.span(open, close) }) %}
integers -> signedInteger {% ([i]) => n.list(i) %} | integers "," signedInteger {% ([all, , i]) => n.more(all, i) %}
signedInteger -> %number {% ([t]) => n.integer(t) %} | sign %number {% ([s, t]) => (s.text === '-' ? -n.integer(t) : n.integer(t)) %}

# ------------------------------------------------------------------ declarations
spins -> "spins" words "on" path {% ([k, names, , cells]) => ({ type: 'spins', names, cells, ...n.span(k, cells) }) %}
couplings -> "couplings" couplingList {% ([k, items]) => ({ type: 'couplings', items, ...n.span(k, items.at(-1).value ?? items.at(-1).name) }) %}
couplingList -> coupling {% ([c]) => n.list(c) %} | couplingList "," coupling {% ([all, , c]) => n.more(all, c) %}
coupling -> %word {% ([t]) => ({ name: n.word(t), value: undefined }) %} | %word "=" expression {% ([t, , value]) => ({ name: n.word(t), value }) %}
definition -> definitionKeyword head "=" whole {% ([k, head, , body]) => ({ type: k.text, head, body, ...n.span(k, body) }) %}
definitionKeyword -> "model" {% n.first %} | "operator" {% n.first %} | "symmetry" {% n.first %}
head -> %word {% ([t]) => n.head(t) %} | %call "(" binder ")" {% ([t, , b, close]) => n.head(t, b, close) %}
law ->
    "law" head "=" whole {% ([k, head, , body]) => ({ type: 'law', head, body, value: undefined, ...n.span(k, body) }) %}
  | "law" head "=" whole "is" quantity {% ([k, head, , body, , value]) => ({ type: 'law', head, body, value, ...n.span(k, value) }) %}
rule ->
    "rule" head "=" whole {% ([k, head, , body]) => ({ type: 'rule', head, body, relation: undefined, bound: undefined, ...n.span(k, body) }) %}
  | "rule" head "=" whole "is" quantity {% ([k, head, , body, , bound]) => ({ type: 'rule', head, body, relation: '==', bound, ...n.span(k, bound) }) %}
  | "rule" head "=" whole "is" bounded quantity {% ([k, head, , body, , relation, bound]) => ({ type: 'rule', head, body, relation: relation.text, bound, ...n.span(k, bound) }) %}
  | "rule" head "=" whole "is" parity {% ([k, head, , body, , relation]) => ({ type: 'rule', head, body, relation: relation.text, bound: undefined, ...n.span(k, relation) }) %}
bounded -> "<=" {% n.first %} | ">=" {% n.first %}
parity -> "even" {% n.first %} | "odd" {% n.first %}
reference ->
    "reference" %word "=" "uniform" "over" "[" paths "]" {% ([k, name, , , , , paths, close]) => ({ type: 'reference', name: n.word(name), kind: 'uniform', paths, ...n.span(k, close) }) %}
  | "reference" %word "=" "stabilizer" "state" "of" paths {% ([k, name, , , , , paths]) => ({ type: 'reference', name: n.word(name), kind: 'stabilizer', paths, ...n.span(k, paths.at(-1)) }) %}
words -> %word {% ([t]) => n.list(n.word(t)) %} | words "," %word {% ([all, , t]) => n.more(all, n.word(t)) %}
paths -> path {% ([p]) => n.list(p) %} | paths "," path {% ([all, , p]) => n.more(all, p) %}

# ------------------------------------------------------------------ maps
map ->
    "map" %word "from" words "to" words rules {% ([k, name, , from, , to, rules]) => ({ type: 'dictionary', name: n.word(name), from, to, rules, ...n.span(k, rules.at(-1)) }) %}
  | "map" %word "=" "gauge" path "with" %word "on" path {% ([k, name, , , symmetry, , g, , cells]) => ({ type: 'gauge', name: n.word(name), symmetry, gauge: n.word(g), cells, ...n.span(k, cells) }) %}
  | "map" %word "=" "circuit" gates {% ([k, name, , , rules]) => ({ type: 'circuit', name: n.word(name), rules, ...n.span(k, rules.at(-1)) }) %}
  | "map" %word "=" "solve" path "for" %word {% ([k, name, , , law, , s]) => ({ type: 'solve', name: n.word(name), law, species: n.word(s), ...n.span(k, s) }) %}
  | "map" %word "on" binder "from" places "to" places states {% ([k, name, , binder, , from, , to, rules]) => ({ type: 'states', name: n.word(name), binder, from, to, rules, ...n.span(k, rules.at(-1)) }) %}
  | "map" %word "=" composition {% ([k, name, , map]) => ({ type: 'composition', name: n.word(name), map, ...n.span(k, map) }) %}
rules -> %rule dictionaryRule {% ([, r]) => n.list(r) %} | rules %rule dictionaryRule {% ([all, , r]) => n.more(all, r) %}
dictionaryRule -> expression "=>" expression for {% ([left, , right, binders]) => ({ type: 'dictionary', left, right, binders, ...n.span(left, binders.at(-1) ?? right) }) %}
for -> null {% () => [] %} | "for" binders {% ([, b]) => b %}
gates -> %rule gate {% ([, r]) => n.list(r) %} | gates %rule gate {% ([all, , r]) => n.more(all, r) %}
gate -> %word places for {% ([g, targets, binders]) => ({ type: 'gate', gate: n.word(g), targets, binders, ...n.span(g, binders.at(-1) ?? targets.at(-1)) }) %}
places -> place {% ([p]) => n.list(p) %} | places place {% ([all, p]) => n.more(all, p) %}
place -> %word "[" expression "]" {% ([s, , cell, close]) => n.spinPlace(s, cell, close) %}
states -> %rule state {% ([, r]) => n.list(r) %} | states %rule state {% ([all, , r]) => n.more(all, r) %}
state -> %ket "=>" expression {% ([k, , image]) => ({ bits: n.ket(k), image, ...n.span(k, image) }) %}
composition ->
    inverse {% n.first %}
  | composition "then" mapAtom {% ([first, , second]) => ({ type: 'then', first, second, ...n.span(first, second) }) %}
  | mapName "then" mapAtom {% ([first, , second]) => ({ type: 'then', first, second, ...n.span(first, second) }) %}
mapAtom -> inverse {% n.first %} | mapName {% n.first %}
inverse ->
    "inverse" mapAtom {% ([k, of]) => ({ type: 'inverse', of, ...n.span(k, of) }) %}
  | "inverse" "(" composition ")" {% ([k, , of, close]) => ({ type: 'inverse', of, ...n.span(k, close) }) %}
mapName -> path {% ([p]) => ({ type: 'map', path: p, ...n.span(p, p) }) %}

# ------------------------------------------------------------------ audits: one set of clauses for all of them
audit ->
    "audit" %word clauses {% ([k, audit, clauses]) => ({ type: 'audit', audit: n.word(audit), subjects: [], clauses, ...n.span(k, clauses.at(-1) ?? audit) }) %}
  | "audit" %word subjects clauses {% ([k, audit, subjects, clauses]) => ({ type: 'audit', audit: n.word(audit), subjects, clauses, ...n.span(k, clauses.at(-1) ?? subjects.at(-1)) }) %}
subjects -> subject {% ([s]) => n.list(s) %} | subjects "," subject {% ([all, , s]) => n.more(all, s) %}
subject ->
    path {% ([p]) => ({ path: p, sector: [], ...n.span(p, p) }) %}
  | path "[" labels "]" {% ([p, , sector, close]) => ({ path: p, sector, ...n.span(p, close) }) %}
labels -> sectorLabel {% ([l]) => n.list(l) %} | labels "," sectorLabel {% ([all, , l]) => n.more(all, l) %}
sectorLabel ->
    path {% ([p]) => ({ path: p, value: undefined, ...n.span(p, p) }) %}
  | path "=" %number {% ([p, , t]) => ({ path: p, value: n.integer(t), ...n.span(p, t) }) %}
  | path "=" sign %number {% ([p, , s, t]) => ({ path: p, value: s.text === '-' ? -n.integer(t) : n.integer(t), ...n.span(p, t) }) %}
clauses -> null {% () => [] %} | clauses clause {% ([all, c]) => n.more(all, c) %}
clause ->
    "with" paths {% ([k, paths]) => ({ name: 'with', paths, ...n.span(k, paths.at(-1)) }) %}
  | "on" sizes {% ([k, sizes]) => ({ name: 'on', sizes, ...n.span(k, sizes.at(-1)) }) %}
  | "levels" %number {% ([k, t]) => ({ name: 'levels', number: n.number(t), ...n.span(k, t) }) %}
  | "order" %number {% ([k, t]) => ({ name: 'order', number: n.number(t), ...n.span(k, t) }) %}
  | "~" subject {% ([k, subject]) => ({ name: '~', subject, ...n.span(k, subject) }) %}
  | "in" "ground" "of" subject {% ([k, , , subject]) => ({ name: 'in ground of', subject, ...n.span(k, subject) }) %}
  | "of" subject {% ([k, subject]) => ({ name: 'of', subject, ...n.span(k, subject) }) %}
  | "from" path {% ([k, path]) => ({ name: 'from', path, ...n.span(k, path) }) %}
  | "over" ranges {% ([k, ranges]) => ({ name: 'over', ranges, ...n.span(k, ranges.at(-1)) }) %}
ranges -> range {% ([r]) => n.list(r) %} | ranges "," range {% ([all, , r]) => n.more(all, r) %}
range ->
    %word "=" quantity {% ([t, , from]) => ({ coupling: n.word(t), from, to: undefined, by: undefined, ...n.span(t, from) }) %}
  | %word "=" quantity ".." quantity "by" quantity {% ([t, , from, , to, , by]) => ({ coupling: n.word(t), from, to, by, ...n.span(t, by) }) %}
# A number where a word may follow that is no factor: `over J = 1 levels 8`.
quantity ->
    plain {% ([f]) => n.product(n.list({ join: '', sign: '', factor: f })) %}
  | sign plain {% ([s, f]) => n.product(n.list({ join: '', sign: '', factor: f }), s) %}
  | plain "/" plain {% ([a, o, b]) => n.product([{ join: '', sign: '', factor: a }, { ...n.join(o, undefined), factor: b }]) %}
  | sign plain "/" plain {% ([s, a, o, b]) => n.product([{ join: '', sign: '', factor: a }, { ...n.join(o, undefined), factor: b }], s) %}
plain -> %number {% ([t]) => n.number(t) %} | root {% n.first %} | "(" whole ")" {% ([o, e, c]) => n.bracket(o, e, c) %}

# ------------------------------------------------------------------ expressions
whole -> expression {% n.first %} | terms "+" "hc" {% ([terms, , hc]) => n.sum(terms, hc) %}
expression -> terms {% ([terms]) => n.sum(terms, undefined) %}
terms ->
    product {% ([p]) => n.list({ sign: '', term: n.product(p) }) %}
  | sign product {% ([s, p]) => n.list({ sign: '', term: n.product(p, s) }) %}
  | terms sign product {% ([all, s, p]) => n.more(all, { sign: s.text, term: n.product(p) }) %}
sign -> "+" {% n.first %} | "-" {% n.first %}

# One level, left to right. A sum( or prod( takes the rest of its product as its body.
product -> run {% n.first %} | run join big {% ([all, j, b]) => n.more(all, { ...j, factor: b }) %} | big {% ([b]) => n.list({ join: '', sign: '', factor: b }) %}
run -> power {% ([p]) => n.list({ join: '', sign: '', factor: p }) %} | run join power {% ([all, j, p]) => n.more(all, { ...j, factor: p }) %}
join ->
    null {% () => n.join(undefined, undefined) %}
  | "%" {% ([o]) => n.join(o, undefined) %}
  | over {% ([o]) => n.join(o, undefined) %}
  | over sign {% ([o, s]) => n.join(o, s) %}
over -> "*" {% n.first %} | "/" {% n.first %}
big ->
    "sum" "(" binders ")" product {% ([k, , binders, , p]) => n.big(k, binders, n.product(p)) %}
  | "prod" "(" binders ")" product {% ([k, , binders, , p]) => n.big(k, binders, n.product(p)) %}
power -> atom {% n.first %} | atom "^" exponent {% ([a, , e]) => n.power(a, e) %}
exponent ->
    %number {% ([t]) => n.number(t) %}
  | sign %number {% ([s, t]) => n.signed(s, n.number(t)) %}
  | "(" whole ")" {% ([o, e, c]) => n.bracket(o, e, c) %}
  | "{" whole "}" {% ([o, e, c]) => n.bracket(o, e, c) %}
atom ->
    %number {% ([t]) => n.number(t) %}
  | %imaginary {% ([t]) => n.imaginary(t) %}
  | %ket {% ([t]) => n.ket(t) %}
  | path {% ([p]) => n.name(p) %}
  | called "(" wholes ")" {% ([p, , args, close]) => n.call(p, args, close) %}
  | %word %spin "[" expression "]" {% ([s, o, , cell, close]) => n.spin(s, o, cell, close) %}
  | root {% n.first %}
  | "(" whole ")" {% ([o, e, c]) => n.bracket(o, e, c) %}
  | "(" expression "," items ")" {% ([o, e, , rest, c]) => n.tuple(o, [e, ...rest], c) %}
root -> "sqrt" "(" whole ")" {% ([k, , e, c]) => n.root(k, e, c) %}
wholes -> whole {% ([e]) => n.list(e) %} | wholes "," whole {% ([all, , e]) => n.more(all, e) %}
path -> pathWords {% ([w]) => n.path(w) %}
pathWords ->
    %word {% ([t]) => n.list(n.word(t)) %}
  | pathWords "." %word {% ([all, , t]) => n.more(all, n.word(t)) %}
  | pathWords "." %label {% ([all, , t]) => n.more(all, n.word(t)) %}
called ->
    %call {% ([t]) => n.path(n.list(n.word(t))) %}
  | pathWords "." %call {% ([all, , t]) => n.path(n.more(all, n.word(t))) %}
  | pathWords "." %labelcall {% ([all, , t]) => n.path(n.more(all, n.word(t))) %}

binders -> binder {% ([b]) => n.list(b) %} | binders "," binder {% ([all, , b]) => n.more(all, b) %}
binder ->
    %word ":" expression {% ([v, , domain]) => n.binder(v, domain, undefined) %}
  | %word ":" expression "where" either {% ([v, , domain, , where]) => n.binder(v, domain, where) %}

# ------------------------------------------------------------------ conditions
either -> both {% n.first %} | either "or" both {% ([left, , right]) => ({ type: 'or', left, right, ...n.span(left, right) }) %}
both -> negation {% n.first %} | both "and" negation {% ([left, , right]) => ({ type: 'and', left, right, ...n.span(left, right) }) %}
negation -> test {% n.first %} | "not" negation {% ([k, body]) => ({ type: 'not', body, ...n.span(k, body) }) %}
test ->
    expression relation expression {% ([left, operator, right]) => ({ type: 'compare', operator: operator.text, left, right, ...n.span(left, right) }) %}
  | expression "in" expression {% ([left, , set]) => ({ type: 'in', left, set, negated: false, ...n.span(left, set) }) %}
  | expression "not" "in" expression {% ([left, , , set]) => ({ type: 'in', left, set, negated: true, ...n.span(left, set) }) %}
  | "(" either ")" {% ([open, body, close]) => ({ type: 'group', body, ...n.span(open, close) }) %}
relation -> "==" {% n.first %} | "!=" {% n.first %} | "<" {% n.first %} | "<=" {% n.first %} | ">" {% n.first %} | ">=" {% n.first %}
