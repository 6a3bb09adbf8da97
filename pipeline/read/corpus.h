#ifndef PHRASEWELD_READ_CORPUS_H_
#define PHRASEWELD_READ_CORPUS_H_

#include <cstdint>
#include <functional>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "absl/status/statusor.h"
#include "base/hash.h"

namespace phraseweld {

enum class ReadLayout { kText, kLines, kParagraphs, kJsonLines };

// One input, as Job::Corpus::files resolved: globs expanded, in corpus order.
struct InputFile {
  std::string path;      // to open; "-" is standard input
  std::string relative;  // below the inputs' common folder, less .zst/.gz; "stdin" for "-"
};

struct ReadOptions {
  ReadLayout layout = ReadLayout::kText;
  std::vector<std::string> fields;  // kJsonLines
  std::string id;                   // kJsonLines; empty: none
  bool keep_bad_lines = false;      // kJsonLines
  size_t block_bytes = size_t{1} << 20;  // aimed at; a block is longer where it cannot be cut
  // Whether a text may be cut before `rest`; the byte before it is a space or a line feed.
  std::function<bool(std::string_view rest)> may_cut_before;
};

// A stretch of one passage's text.
struct TextPiece {
  std::string_view text;     // decoded; into Block::bytes or Block::decoded
  uint64_t text_offset = 0;  // bytes of the passage's text before this piece
  uint64_t source_begin = 0;  // the bytes [source_begin, source_end) of Block::bytes hold this text
  uint64_t source_end = 0;
  uint32_t field = 0;         // index into ReadOptions::fields; 0 in the other layouts
  bool begins_passage = true;
  bool ends_passage = true;   // false: the passage goes on in the next block
  bool escaped = false;       // JSON: text is not Block::bytes[source_begin, source_end) as it is
};

// A document, or the part of one that lies in a block.
struct DocumentPart {
  uint32_t first_piece = 0;   // pieces [first_piece, next document's first_piece)
  bool begins = true;         // false: it began in an earlier block
  bool ends = true;           // false: it goes on in the next block
  std::string_view id;        // JSON id; empty where there is none (its name is then its ordinal)
};

// Some consecutive bytes of one input and what is in them. Blocks in order, their bytes one after
// another, are the (decompressed) inputs, to the byte. An empty input makes one block of no bytes
// (layout kText: with one empty document; the others: with none).
struct Block {
  uint64_t index = 0;        // in the corpus, from 0
  uint32_t file = 0;         // index of the input
  uint64_t file_offset = 0;  // of bytes[0] in the decompressed input
  uint64_t first_line = 1;   // number of the line that bytes[0] is in
  bool ends_file = false;
  std::string bytes;
  std::string decoded;       // texts of escaped pieces
  std::vector<TextPiece> pieces;
  std::vector<DocumentPart> documents;
  uint64_t bad_lines = 0;    // lines kept though they are no JSON object

  // Filled by the source for the parser: how the block begins and ends.
  bool continues_document = false;  // bytes[0] is inside a document that began earlier
  bool document_goes_on = false;    // the last document goes on in the next block
  uint64_t passage_offset = 0;      // where continues_document: bytes of that passage so far
};

// What is known of an input once all its blocks have been handed out.
struct InputDigest {
  uint64_t stored_bytes = 0;  // as on disk
  uint64_t text_bytes = 0;    // decompressed
  Hash128 stored_hash;        // XXH3-128 of the stored bytes
};

// Hands out the blocks of all inputs in order. Not thread-safe.
class BlockSource {
 public:
  BlockSource(std::vector<InputFile> inputs, const ReadOptions& options);
  ~BlockSource();

  // Fills all of *block but decoded, pieces, documents and bad_lines (cleared). False at the end of
  // the corpus. Errors name the file and the byte offset: not found, a directory, unreadable, a
  // compressed stream that is cut or damaged.
  absl::StatusOr<bool> Next(Block* block);

  // One an input, complete when Next() has returned false.
  const std::vector<InputDigest>& digests() const;

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

// Finds the documents and passages of a block. Not thread-safe; one a thread.
class BlockParser {
 public:
  BlockParser(std::vector<InputFile> inputs, const ReadOptions& options);
  ~BlockParser();
  // Fills documents, pieces, decoded and bad_lines. A line that is not a JSON object is an error
  // with file, line and byte offset unless options.keep_bad_lines.
  absl::Status Parse(Block* block);

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

// Translates ascending offsets of an escaped piece's text into offsets of Block::bytes.
class SourceMap {
 public:
  SourceMap(const Block& block, const TextPiece& piece);
  // `text_offset` (in the piece) must not be less than in the call before. An offset at the end of
  // the text maps to piece.source_end.
  uint64_t ToSource(uint64_t text_offset);

 private:
  const char* cursor_;
  const char* base_;
  const char* end_;
  uint64_t at_ = 0;
};

// Expands globs and directories' names into inputs. Errors, all of them in one message, a line
// each: a pattern that matches nothing, a directory, a file named twice, two inputs with one
// `relative` name. "-" may stand once.
absl::StatusOr<std::vector<InputFile>> ResolveInputs(const std::vector<std::string>& patterns);

}  // namespace phraseweld

#endif  // PHRASEWELD_READ_CORPUS_H_
