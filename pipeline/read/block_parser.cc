#include <utility>

#include "absl/strings/str_cat.h"
#include "base/utf8.h"
#include "read/corpus.h"
#include "read/json_line.h"
#include "read/lines.h"

namespace phraseweld {
namespace {

std::vector<std::string> NamesOf(const ReadOptions& options) {
  std::vector<std::string> names = options.fields;
  if (!options.id.empty()) names.push_back(options.id);
  return names;
}

// The layouts in which a document is one passage, and its text the bytes [begin, end) of the block.
void AddDocument(Block* block, size_t begin, size_t end, bool begins, bool ends) {
  block->documents.push_back({.first_piece = static_cast<uint32_t>(block->pieces.size()),
                              .begins = begins,
                              .ends = ends,
                              .id = {}});
  block->pieces.push_back({.text = std::string_view(block->bytes).substr(begin, end - begin),
                           .text_offset = begins ? 0 : block->passage_offset,
                           .source_begin = begin,
                           .source_end = end,
                           .field = 0,
                           .begins_passage = begins,
                           .ends_passage = ends,
                           .escaped = false});
}

void ParseLines(Block* block) {
  const std::string_view bytes = block->bytes;
  for (size_t begin = 0; begin < bytes.size();) {
    const size_t end = FindLineFeed(bytes, begin);
    const bool begins = begin > 0 || !block->continues_document;
    const bool ends = end < bytes.size() || !block->document_goes_on;
    // Part of a line is never blank: the source does not cut those.
    if (!begins || !ends || !IsBlank(bytes.substr(begin, end - begin))) {
      AddDocument(block, begin, end, begins, ends);
    }
    begin = end + 1;
  }
}

void ParseParagraphs(Block* block) {
  const std::string_view bytes = block->bytes;
  bool inside = block->continues_document;
  bool begins = !inside;
  size_t paragraph = 0;
  size_t end = 0;  // of the last line of the paragraph
  for (size_t line = 0; line < bytes.size();) {
    const size_t line_end = FindLineFeed(bytes, line);
    const bool is_part = (line == 0 && block->continues_document) ||
                         (line_end == bytes.size() && block->document_goes_on);
    const bool blank = !is_part && IsBlank(bytes.substr(line, line_end - line));
    if (!blank) {
      if (!inside) paragraph = line;
      inside = true;
      end = line_end;
    } else if (inside) {
      AddDocument(block, paragraph, end, begins, true);
      inside = false;
      begins = true;
    }
    line = line_end + 1;
  }
  if (!inside) return;
  if (block->document_goes_on) end = bytes.size();  // a line feed that it ends with is inside
  AddDocument(block, paragraph, end, begins, !block->document_goes_on);
}

}  // namespace

class BlockParser::Impl {
 public:
  Impl(std::vector<InputFile> inputs, const ReadOptions& options)
      : inputs_(std::move(inputs)),
        layout_(options.layout),
        fields_(options.fields.size()),
        keep_bad_lines_(options.keep_bad_lines),
        json_(NamesOf(options)) {}

  absl::Status Parse(Block* block) {
    block->decoded.clear();
    block->pieces.clear();
    block->documents.clear();
    block->bad_lines = 0;
    // What the JSON checker needs; and it keeps a short string from living inside the Block, where
    // moving the Block would leave the pieces' texts behind.
    block->bytes.reserve(block->bytes.size() + JsonLine::Padding());
    switch (layout_) {
      case ReadLayout::kText:
        AddDocument(block, 0, block->bytes.size(), !block->continues_document,
                    !block->document_goes_on);
        break;
      case ReadLayout::kLines:
        ParseLines(block);
        break;
      case ReadLayout::kParagraphs:
        ParseParagraphs(block);
        break;
      case ReadLayout::kJsonLines:
        return ParseJsonLines(block);
    }
    return absl::OkStatus();
  }

 private:
  absl::Status ParseJsonLines(Block* block) {
    const std::string_view bytes = block->bytes;
    size_t begin = 0;
    if (block->file_offset == 0 && bytes.starts_with(kByteOrderMark)) begin = kByteOrderMark.size();
    for (uint64_t line = 0; begin < bytes.size(); ++line) {
      const size_t end = FindLineFeed(bytes, begin);
      const std::string_view text = bytes.substr(begin, end - begin);
      if (!IsBlank(text)) {
        const std::string fault = json_.Fault(text);
        if (fault.empty()) {
          AddObject(block, text);
        } else if (keep_bad_lines_) {
          ++block->bad_lines;
        } else {
          return absl::DataLossError(absl::StrCat(
              inputs_[block->file].path, ": line ", block->first_line + line, " (from byte ",
              block->file_offset + begin, ") is not a JSON object: ", fault,
              " Mend the line, or set corpus.bad_lines: keep to pass such lines through."));
        }
      }
      begin = end + 1;
    }
    return absl::OkStatus();
  }

  void AddObject(Block* block, std::string_view line) {
    // Unescaped text is never longer than its source, so that this never moves; and like the bytes
    // it must not live inside the Block.
    if (block->decoded.empty()) block->decoded.reserve(block->bytes.capacity());
    const std::vector<JsonMember>& members = json_.Find(line, &block->decoded);
    block->documents.push_back({.first_piece = static_cast<uint32_t>(block->pieces.size()),
                                .begins = true,
                                .ends = true,
                                .id = {}});
    // After the fields comes the id, if one is wanted.
    if (members.size() > fields_) block->documents.back().id = members.back().text;
    for (size_t field = 0; field < fields_; ++field) {
      const JsonMember& member = members[field];
      if (member.kind != JsonMember::Kind::kString) continue;
      const auto begin = static_cast<uint64_t>(member.raw.data() - block->bytes.data());
      block->pieces.push_back({.text = member.text,
                               .text_offset = 0,
                               .source_begin = begin,
                               .source_end = begin + member.raw.size(),
                               .field = static_cast<uint32_t>(field),
                               .begins_passage = true,
                               .ends_passage = true,
                               .escaped = member.escaped});
    }
  }

  const std::vector<InputFile> inputs_;
  const ReadLayout layout_;
  const size_t fields_;
  const bool keep_bad_lines_;
  JsonLine json_;
};

BlockParser::BlockParser(std::vector<InputFile> inputs, const ReadOptions& options)
    : impl_(std::make_unique<Impl>(std::move(inputs), options)) {}

BlockParser::~BlockParser() = default;

absl::Status BlockParser::Parse(Block* block) { return impl_->Parse(block); }

}  // namespace phraseweld
