#!/bin/sh
# Can compare_results.py fail? Spoils one number at a time and expects a complaint; turns pairs round and expects none.
set -u
here=$(cd "$(dirname "$0")" && pwd)
. "$here/find_python.sh"
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
"$PYTHON" "$here/plain_contest.py" "$here/studies/given_splits.yaml" --folds "$here/studies/splits.csv" -o "$work/a.json" || exit 1
status=0

expect() {  # STATUS WHAT CHANGE: applies one Python statement to the results r
  "$PYTHON" -c "import json, sys
r = json.load(open(sys.argv[1])); $3
json.dump(r, open(sys.argv[2], 'w'))" "$work/a.json" "$work/b.json" || exit 1
  "$PYTHON" "$here/compare_results.py" "$work/a.json" "$work/b.json" --brief >"$work/said"
  if [ $? -eq "$1" ]; then echo "ok      $2"; else echo "WRONG   $2: $(cat "$work/said")"; status=1; fi
}

expect 0 "the same file agrees" "pass"
expect 0 "a change below the tolerance passes" "r['theories'][0]['heldout']['loss'] *= 1 + 5e-10"
expect 1 "a loss that is off by 2e-9 is seen" "r['theories'][0]['heldout']['loss'] *= 1 + 2e-9"
expect 1 "a p-value that is off is seen" "r['pairs'][2]['corrected']['p'] *= 1.001"
expect 1 "a number that is absent is seen" "del r['theories'][1]['criteria']['gm']"
expect 1 "a null in place of a number is seen" "r['pairs'][0]['rows']['low'] = None"
expect 1 "a theory that is absent is seen" "del r['theories'][1]"
expect 1 "a term that is absent is seen" "del r['theories'][0]['equations'][0]['terms'][1]"
expect 1 "a pair that is absent is seen" "del r['pairs'][3]"
expect 1 "a rank that is wrong is seen" "r['theories'][0]['rank'] = 2"
expect 0 "another order of theories and terms agrees" "r['theories'].reverse(); r['theories'][0]['equations'][0]['terms'].reverse()"
expect 0 "a pair told from its other side agrees" "
word = {'first predicts better': 'second predicts better', 'second predicts better': 'first predicts better'}
for p in r['pairs']:
    loss = {e['name']: e['heldout']['loss'] for e in r['theories'] + r['benchmarks']}
    p['a'], p['b'], p['difference'], p['relative'] = p['b'], p['a'], -p['difference'], -p['difference'] / loss[p['a']]
    for t in (p['rows'], p['corrected'], p['both']):
        if 't' in t: t['t'] = -t['t']
        t['low'], t['high'] = -t['high'], -t['low']
        if 'relative_low' in t: t['relative_low'], t['relative_high'] = t['low'] / loss[p['b']], t['high'] / loss[p['b']]
    if 'encompassing' in p:
        e = p['encompassing']; e['a_knows_more'], e['b_knows_more'] = e['b_knows_more'], e['a_knows_more']
    p['verdict'] = word.get(p['verdict'], p['verdict'])"
expect 1 "another verdict of a pair is seen" "r['pairs'][0]['verdict'] = 'practically equal'"
expect 1 "the smaller p of two tests is seen" "r['pairs'][3]['both']['p'] = min(r['pairs'][3]['rows']['p'], r['pairs'][3]['corrected']['p'])"
expect 1 "encompassing tests in each other's place are seen" "
e = r['pairs'][0]['encompassing']; e['a_knows_more'], e['b_knows_more'] = e['b_knows_more'], e['a_knows_more']"
expect 1 "a nested pair that is not said to be one is seen" "del r['pairs'][0]['nested']"
expect 1 "another winner is seen" "r['winner'] = r['theories'][1]['name'] if r['winner'] is None else None"
expect 1 "a p of the confidence set that is off by .1 is seen" "
r['theories'][1]['confidence_set']['p_max'] = (r['theories'][1]['confidence_set']['p_max'] + .1) % 1"
expect 0 "a p of the confidence set that is off by .01 passes" "r['theories'][1]['confidence_set']['p_max'] += .01"
expect 1 "a stack's loss that is off by 2e-9 is seen" "r['stack']['loss'] *= 1 + 2e-9"
expect 1 "a stack's weight that is off by 2e-9 is seen" "r['stack']['weights'][0]['weight'] += 2e-9"
expect 1 "a third with another row is seen" "r['disagreement']['thirds'][1]['rows'] += 1"
expect 1 "the end of a third that is off is seen" "r['disagreement']['thirds'][2]['from'] *= 1.001"
expect 1 "a number of repeats that is wrong is seen" "r['trial']['repeats'] += 1"
exit $status
