#ifndef PHRASEWELD_BASE_ENTRY_H_
#define PHRASEWELD_BASE_ENTRY_H_

#include <cstdint>

namespace phraseweld {

// The corpus as the passes see it is one flat array of 4-byte entries, one a word, plus marks.
//  - below kInside: a token, its value the id of its type (a word or a phrase);
//  - kInside and up to kFirstMark: the place of a word that a merge took in; the low 31 bits are
//    the id of some type, kept so that the phrases inside a longer phrase can still be told;
//  - kFirstMark and up: a mark. Marks stand between words, never inside a token.
// A merge changes entries in place and removes none, so the k-th word of a passage keeps its place
// in every pass.
using Entry = uint32_t;

inline constexpr Entry kInside = 0x80000000u;
inline constexpr Entry kFirstMark = 0xFFFFFFF0u;
inline constexpr Entry kDocumentEnd = 0xFFFFFFFDu;  // ends a document, and so its last passage
inline constexpr Entry kPassageEnd = 0xFFFFFFFEu;   // between two passages of one document
inline constexpr Entry kBreak = 0xFFFFFFFFu;        // a gap that is not open

// The largest number of types: ids stay below kInside and clear of the marks.
inline constexpr uint32_t kMostTypes = 0x7FFFFF00u;

constexpr bool IsToken(Entry entry) { return entry < kInside; }
constexpr bool IsMark(Entry entry) { return entry >= kFirstMark; }
constexpr bool IsInside(Entry entry) { return entry >= kInside && entry < kFirstMark; }

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_ENTRY_H_
