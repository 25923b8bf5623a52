import { useEffect } from 'react';
import { create } from 'zustand';
import { BalancePanel } from './BalancePanel';
import { BenchCautions } from './BenchCautions';
import { IdentifyPanel } from './IdentifyPanel';
import { followGivens } from './identifying';
import { LinkPanel } from './LinkPanel';
import { LogPanel } from './LogPanel';
import { RetunePanel } from './RetunePanel';
import './bench.css';

const TOPICS = ['log', 'identify', 'balance', 'link', 'retune'] as const;
type Topic = (typeof TOPICS)[number];

const TOPIC_WORDS: Readonly<Record<Topic, string>> = {
  log: 'Log',
  identify: 'Identify',
  balance: 'Balance',
  link: 'Live link',
  retune: 'Retune',
};

/** The part of the bench that is open; it stays so while other stations are looked at. */
const useTopic = create<{ readonly topic: Topic }>()(() => ({ topic: 'log' }));

/** What did the real thing do, and what does that say of my numbers? */
export function BenchSheet() {
  const topic = useTopic((state) => state.topic);
  useEffect(followGivens, []);
  return (
    <>
      <nav className="bench-topics" aria-label="At the bench">
        {TOPICS.map((each) => (
          <button
            key={each}
            type="button"
            aria-pressed={each === topic}
            onClick={() => useTopic.setState({ topic: each })}
          >
            {TOPIC_WORDS[each]}
          </button>
        ))}
      </nav>
      <TopicPanel topic={topic} />
      <BenchCautions />
    </>
  );
}

function TopicPanel({ topic }: { readonly topic: Topic }) {
  switch (topic) {
    case 'log':
      return <LogPanel />;
    case 'identify':
      return <IdentifyPanel />;
    case 'balance':
      return <BalancePanel />;
    case 'link':
      return <LinkPanel />;
    case 'retune':
      return <RetunePanel />;
  }
}
