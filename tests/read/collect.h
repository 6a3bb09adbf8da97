#ifndef PHRASEWELD_TESTS_READ_COLLECT_H_
#define PHRASEWELD_TESTS_READ_COLLECT_H_

#include <gtest/gtest.h>

#include <algorithm>
#include <functional>
#include <ostream>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "absl/status/statusor.h"
#include "base/status.h"
#include "read/corpus.h"

namespace phraseweld {

struct Passage {
  uint32_t field = 0;
  std::string text;
  bool operator==(const Passage&) const = default;
};

struct Document {
  std::string id;
  std::vector<Passage> passages;
  bool operator==(const Document&) const = default;
};

inline void PrintTo(const Document& document, std::ostream* out) {
  *out << "{" << document.id;
  for (const Passage& passage : document.passages) {
    *out << " " << passage.field << ":" << testing::PrintToString(passage.text);
  }
  *out << "}";
}

inline ReadOptions OptionsFor(ReadLayout layout, size_t block_bytes = size_t{1} << 20,
                              std::function<bool(std::string_view)> may_cut_before = nullptr) {
  ReadOptions options;
  options.layout = layout;
  options.block_bytes = block_bytes;
  options.may_cut_before = std::move(may_cut_before);
  if (layout == ReadLayout::kJsonLines) options.fields = {"t"};
  return options;
}

// A corpus put together again from its blocks.
struct Collected {
  std::vector<Document> documents;
  std::vector<std::string> files;   // bytes of each input
  std::vector<std::string> blocks;  // bytes of each block
  std::vector<InputDigest> digests;
  uint64_t bad_lines = 0;
  size_t largest_capacity = 0;  // of a block's bytes
};

// Reads all inputs and checks on the way that every block says of itself what is so.
inline absl::StatusOr<Collected> Collect(const std::vector<InputFile>& inputs,
                                         const ReadOptions& options) {
  Collected all;
  all.files.resize(inputs.size());
  BlockSource source(inputs, options);
  BlockParser parser(inputs, options);
  Block block;
  size_t file = 0;
  bool inside_document = false;
  uint64_t line = 1;
  while (true) {
    PW_ASSIGN_OR_RETURN(const bool more, source.Next(&block));
    if (!more) break;
    std::string& bytes = all.files[block.file];
    EXPECT_EQ(block.index, all.blocks.size());
    EXPECT_EQ(block.file, file);
    EXPECT_EQ(block.file_offset, bytes.size());
    EXPECT_EQ(block.first_line, line);
    EXPECT_EQ(block.continues_document, inside_document);
    EXPECT_TRUE(!block.bytes.empty() || (block.ends_file && block.file_offset == 0));
    all.largest_capacity = std::max(all.largest_capacity, block.bytes.capacity());
    PW_RETURN_IF_ERROR(parser.Parse(&block));
    all.bad_lines += block.bad_lines;
    for (size_t i = 0; i < block.documents.size(); ++i) {
      const DocumentPart& part = block.documents[i];
      const size_t end =
          i + 1 < block.documents.size() ? block.documents[i + 1].first_piece : block.pieces.size();
      EXPECT_EQ(part.begins, !(i == 0 && inside_document));
      EXPECT_EQ(part.ends, !(i + 1 == block.documents.size() && block.document_goes_on));
      if (part.begins) all.documents.push_back({.id = std::string(part.id), .passages = {}});
      for (size_t k = part.first_piece; k < end; ++k) {
        const TextPiece& piece = block.pieces[k];
        EXPECT_EQ(piece.begins_passage, part.begins);
        EXPECT_EQ(piece.ends_passage, part.ends);
        const std::string_view raw =
            std::string_view(block.bytes)
                .substr(piece.source_begin, piece.source_end - piece.source_begin);
        if (piece.escaped) {
          EXPECT_NE(raw.find('\\'), std::string_view::npos);
          EXPECT_GE(piece.text.data(), block.decoded.data());
          EXPECT_LE(piece.text.data() + piece.text.size(),
                    block.decoded.data() + block.decoded.size());
        } else {
          EXPECT_EQ(piece.text, raw);
          EXPECT_EQ(piece.text.data(), block.bytes.data() + piece.source_begin);
        }
        if (piece.begins_passage) {
          all.documents.back().passages.push_back({.field = piece.field, .text = {}});
        }
        std::string& text = all.documents.back().passages.back().text;
        EXPECT_EQ(piece.text_offset, text.size());
        text += piece.text;
      }
    }
    EXPECT_FALSE(block.continues_document && block.documents.empty());
    inside_document = block.document_goes_on;
    bytes += block.bytes;
    line += static_cast<uint64_t>(std::count(block.bytes.begin(), block.bytes.end(), '\n'));
    all.blocks.push_back(block.bytes);
    if (block.ends_file) {
      EXPECT_FALSE(inside_document);
      ++file;
      line = 1;
    } else if (inside_document) {
      EXPECT_TRUE(bytes.ends_with(' ') || bytes.ends_with('\n'));
    }
  }
  EXPECT_EQ(file, inputs.size());
  all.digests = source.digests();
  return all;
}

}  // namespace phraseweld

#endif  // PHRASEWELD_TESTS_READ_COLLECT_H_
