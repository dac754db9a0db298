/** Questions to the person, one at a time, in the window's own dialog. */
import { useEffect, useId, useRef, useState } from 'react';
import type { Question } from './question.ts';

/** `answer` is an answer's id, a choice, or null; `entry` what was typed. */
export function QuestionDialog({
  question,
  onAnswer,
}: {
  question: Question;
  onAnswer(answer: string | null, entry: string): void;
}) {
  const ref = useRef<HTMLDialogElement>(null);
  const id = useId();
  const [entry, setEntry] = useState(question.entry?.value ?? '');
  useEffect(() => {
    ref.current?.showModal();
  }, []);
  return (
    <dialog
      ref={ref}
      aria-labelledby={id}
      onCancel={(e) => {
        e.preventDefault();
        onAnswer(null, entry);
      }}
    >
      <form
        onSubmit={(e) => {
          e.preventDefault();
          if (question.answers[0]) onAnswer(question.answers[0][0], entry);
        }}
      >
        <h2 id={id}>{question.title}</h2>
        <p>{question.text}</p>
        {question.entry && (
          <div className="field">
            <label htmlFor={`${id}-entry`}>{question.entry.label}</label>
            <span className="entry">
              <input
                id={`${id}-entry`}
                autoComplete="off"
                value={entry}
                onChange={(e) => setEntry(e.target.value)}
              />
            </span>
          </div>
        )}
        {question.choices && (
          <ul className="choices">
            {question.choices.map((c) => (
              <li key={c}>
                <button type="button" onClick={() => onAnswer(c, entry)}>
                  {c}
                </button>
              </li>
            ))}
          </ul>
        )}
        <p className="row end">
          {question.answers.map(([answer, label], i) => (
            <button
              key={answer}
              type={i === 0 ? 'submit' : 'button'}
              className={i === 0 ? 'main' : ''}
              onClick={i === 0 ? undefined : () => onAnswer(answer, entry)}
            >
              {label}
            </button>
          ))}
          <button type="button" onClick={() => onAnswer(null, entry)}>
            Cancel
          </button>
        </p>
      </form>
    </dialog>
  );
}
