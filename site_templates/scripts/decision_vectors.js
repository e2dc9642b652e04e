/* Made by python -m commission.acceptance.vectors: change nothing here by hand. */
var commissionDecisionVectors = {
 "decide": [
  {
   "name": "simple, on the limit",
   "arguments": [
    3135.0,
    90.0,
    3135.0,
    null,
    "simple",
    0.95,
    null
   ],
   "answer": {
    "outcome": "conforming",
    "probability": 0.5,
    "capable": true,
    "acceptanceLow": 3135.0,
    "acceptanceHigh": null,
    "uncertaintyNeeded": null
   }
  },
  {
   "name": "simple, test not capable, near the limit",
   "arguments": [
    3200.0,
    140.0,
    3135.0,
    null,
    "simple",
    0.95,
    165.0
   ],
   "answer": {
    "outcome": "undecided",
    "probability": 0.6787784711628848,
    "capable": false,
    "acceptanceLow": 3365.279507773206,
    "acceptanceHigh": null,
    "uncertaintyNeeded": 84.18522039256793
   }
  },
  {
   "name": "guarded, on the acceptance limit",
   "arguments": [
    3.1644853626951472,
    0.1,
    3.0,
    null,
    "guarded",
    0.95,
    null
   ],
   "answer": {
    "outcome": "conforming",
    "probability": 0.95,
    "capable": true,
    "acceptanceLow": 3.1644853626951472,
    "acceptanceHigh": null,
    "uncertaintyNeeded": null
   }
  },
  {
   "name": "guarded, inside the guard band",
   "arguments": [
    3200.0,
    90.0,
    3135.0,
    null,
    "guarded",
    0.95,
    null
   ],
   "answer": {
    "outcome": "undecided",
    "probability": 0.7649210685711652,
    "capable": true,
    "acceptanceLow": 3283.0368264256326,
    "acceptanceHigh": null,
    "uncertaintyNeeded": 39.51719407426501
   }
  },
  {
   "name": "two limits, inside",
   "arguments": [
    13.6,
    1.8,
    12.5,
    16.3,
    "simple",
    0.95,
    null
   ],
   "answer": {
    "outcome": "conforming",
    "probability": 0.6626297864953077,
    "capable": true,
    "acceptanceLow": 12.5,
    "acceptanceHigh": 16.3,
    "uncertaintyNeeded": null
   }
  },
  {
   "name": "far tail",
   "arguments": [
    100.0,
    1.0,
    null,
    130.0,
    "guarded",
    0.999,
    null
   ],
   "answer": {
    "outcome": "conforming",
    "probability": 1.0,
    "capable": true,
    "acceptanceLow": null,
    "acceptanceHigh": 126.90976769383218,
    "uncertaintyNeeded": null
   }
  }
 ],
 "significant": [
  {
   "name": "below the band",
   "arguments": [
    0.9,
    0.5,
    0.95
   ],
   "answer": false
  },
  {
   "name": "above the band",
   "arguments": [
    -1.0,
    0.5,
    0.95
   ],
   "answer": true
  }
 ],
 "fixed": [
  {
   "name": "fixed 2.5 0",
   "arguments": [
    2.5,
    0
   ],
   "answer": "3"
  },
  {
   "name": "fixed -2.5 0",
   "arguments": [
    -2.5,
    0
   ],
   "answer": "-3"
  },
  {
   "name": "fixed 0.125 2",
   "arguments": [
    0.125,
    2
   ],
   "answer": "0.13"
  },
  {
   "name": "fixed -0.125 2",
   "arguments": [
    -0.125,
    2
   ],
   "answer": "-0.13"
  }
 ]
};
