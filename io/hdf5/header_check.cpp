#include "io/hdf5/header_check.hpp"

#include <fmt/format.h>

#include <unordered_set>

#include "io/hdf5/file_bytes.hpp"
#include "io/hdf5/message_check.hpp"
#include "io/hdf5/symbol_table_check.hpp"

namespace farsum::io::hdf5 {
namespace {

using namespace std::string_view_literals;

constexpr auto kSignature = "\x89HDF\r\n\x1a\n"sv;

/// Finds the superblock behind 0, 512, 1024, 2048, ... bytes; false when there is none.
bool find_superblock(FileBytes& file) {
  for (std::uint64_t base = 0; base < file.size(); base = base == 0 ? 512 : 2 * base) {
    const FilePiece piece = file.read_up_to(base, kSignature.size(), "signature");
    if (!file.cursor(piece).begins_with(kSignature)) continue;
    file.set_base(base);
    return true;
  }
  return false;
}

class Walk {
 public:
  explicit Walk(FileBytes& file) : file_(file) {}
  void run();

 private:
  /// A block of messages, with the bytes of one message's head and the version of the header it belongs to.
  struct Messages {
    unsigned version, head_bytes;
    std::vector<std::pair<std::uint64_t, std::uint64_t>> continuations;
  };

  void superblock();
  void old_superblock(ByteCursor at, unsigned version);
  void new_superblock(ByteCursor at);
  void check_end(ByteCursor at, std::uint64_t stored_base, std::uint64_t stored_end) const;

  void object_header(std::uint64_t address);
  void old_header(ByteCursor at, std::uint64_t address);
  void new_header(ByteCursor at, std::uint64_t address);
  void continuations(Messages& messages);
  void message_block(ByteCursor block, Messages& messages);
  void message(unsigned type, unsigned flags, ByteCursor body, Messages& messages);

  void reach(std::uint64_t address) {
    if (address != kNoAddress && seen_.insert(address).second) pending_.push_back(address);
  }

  FileBytes& file_;
  FieldSizes sizes_;
  bool in_cache_image_ = false;
  std::uint64_t most_symbols_ = ~std::uint64_t{0};  ///< of a symbol node
  std::vector<std::uint64_t> pending_;              ///< object headers still to be read
  std::unordered_set<std::uint64_t> seen_;          ///< object headers found so far
};

void Walk::run() {
  superblock();
  while (!pending_.empty() && !in_cache_image_) {
    const std::uint64_t address = pending_.back();
    pending_.pop_back();
    object_header(address);
  }
}

void Walk::superblock() {
  const FilePiece piece = file_.read_up_to(0, 256, "superblock");
  ByteCursor at = file_.cursor(piece);
  at.skip(kSignature.size());
  const auto version = static_cast<unsigned>(at.number(1));
  if (version > 3) return;
  if (version < 2) at.skip(4);  // versions of other structures, reserved
  const ByteCursor place = at;
  sizes_.offset = at.number(1);
  sizes_.length = at.number(1);
  const auto usable = [](std::size_t size) { return size == 2 || size == 4 || size == 8; };
  if (!usable(sizes_.length) || !(usable(sizes_.offset) || sizes_.offset == 16 || sizes_.offset == 32))
    place.fail(fmt::format("addresses of {} and lengths of {} bytes cannot be read", sizes_.offset, sizes_.length));
  version < 2 ? old_superblock(at, version) : new_superblock(at);
}

void Walk::old_superblock(ByteCursor at, unsigned version) {
  at.skip(1);
  most_symbols_ = 2 * at.number(2);
  at.skip(2 + 4 + (version == 1 ? 4 : 0));  // tree width, flags, width of chunk trees
  const std::uint64_t base = at.number(sizes_.offset);
  at.skip(sizes_.offset);  // free space
  check_end(at, base, at.number(sizes_.offset));
  at.skip(sizes_.offset + sizes_.length);  // driver information, name of the root group
  reach(read_address(at, sizes_));
}

void Walk::new_superblock(ByteCursor at) {
  at.skip(1);  // flags
  const std::uint64_t base = at.number(sizes_.offset);
  const std::uint64_t extension = read_address(at, sizes_);
  check_end(at, base, at.number(sizes_.offset));
  reach(read_address(at, sizes_));
  reach(extension);  // read first, as it tells of a cache image
}

void Walk::check_end(ByteCursor at, std::uint64_t stored_base, std::uint64_t stored_end) const {
  if (stored_end < stored_base) at.fail("the superblock gives an end of the file before its beginning");
  if (stored_end - stored_base > file_.size() - file_.base())
    at.fail(
        fmt::format("the file is truncated, {} of {} bytes are there", file_.size() - file_.base(), stored_end - stored_base));
}

void Walk::object_header(std::uint64_t address) {
  constexpr std::uint64_t kLongestPrefix = 34;  // version 2 with times, attribute limits and a size of eight bytes
  const FilePiece piece = file_.read_up_to(address, kLongestPrefix, "object header");
  const ByteCursor at = file_.cursor(piece);
  at.begins_with("OHDR") ? new_header(at, address) : old_header(at, address);
}

void Walk::old_header(ByteCursor at, std::uint64_t address) {
  constexpr unsigned kPrefix = 16;
  const ByteCursor start = at;
  const std::uint64_t version = at.number(1);
  if (version != 1) start.fail(fmt::format("an object header has version {}, 1 or 2 expected", version));
  at.skip(1 + 2 + 4);  // reserved, number of messages, number of links
  const std::uint64_t bytes = at.number(4);
  Messages messages{1, 8, {}};
  const FilePiece block = file_.read(address + kPrefix, bytes, "object header");
  message_block(file_.cursor(block), messages);
  continuations(messages);
}

void Walk::new_header(ByteCursor at, std::uint64_t address) {
  const std::uint64_t start = at.offset();
  at.skip(4);
  const ByteCursor place = at;
  const std::uint64_t version = at.number(1);
  if (version != 2) place.fail(fmt::format("an object header has version {}, 2 expected", version));
  const std::uint64_t flags = at.number(1);
  at.skip((flags & 0x20u ? 16 : 0) + (flags & 0x10u ? 4 : 0));  // times, limits of attribute storage
  const std::uint64_t bytes = at.number(std::size_t{1} << (flags & 3u));
  Messages messages{2, flags & 0x04u ? 6u : 4u, {}};
  const FilePiece block = file_.read(address + (at.offset() - start), bytes, "object header");
  message_block(file_.cursor(block), messages);
  continuations(messages);
}

/// Reads the continuation blocks found so far and those found in them; a block that is reached twice closes a circle.
void Walk::continuations(Messages& messages) {
  constexpr std::uint64_t kFrame = 8;  // signature and checksum, version 2
  std::unordered_set<std::uint64_t> read;
  for (std::size_t i = 0; i < messages.continuations.size(); ++i) {
    const auto [address, bytes] = messages.continuations[i];
    const FilePiece piece = file_.read(address, bytes, "continuation block");
    ByteCursor block = file_.cursor(piece);
    if (!read.insert(address).second) block.fail("a continuation block of an object header is reached twice");
    if (messages.version == 2) {
      block.expect("OCHK");
      if (bytes < kFrame) block.fail("a continuation block is shorter than its frame");
      block = block.take(bytes - kFrame, "continuation block");
    }
    message_block(block, messages);
  }
}

void Walk::message_block(ByteCursor block, Messages& messages) {
  while (block.left() > 0) {
    if (messages.version == 2 && block.left() < messages.head_bytes) return;  // a gap, legal there
    const ByteCursor start = block;
    const auto type = static_cast<unsigned>(block.number(messages.version == 1 ? 2 : 1));
    const std::uint64_t bytes = block.number(2);
    const auto flags = static_cast<unsigned>(block.number(1));
    block.skip(messages.version == 1 ? 3 : messages.head_bytes - 4);  // reserved, or order of creation
    if (messages.version == 1 && bytes % 8) start.fail(fmt::format("a message has {} bytes, no multiple of 8", bytes));
    message(type, flags, block.take(bytes, "message"), messages);
  }
}

void Walk::message(unsigned type, unsigned flags, ByteCursor body, Messages& messages) {
  check_message(type, flags, body, sizes_);
  if (flags & kSharedFlag) return;
  if (type == kContinuationMessage) {
    const std::uint64_t address = read_address(body, sizes_);
    messages.continuations.emplace_back(address, body.number(sizes_.length));
  } else if (type == kSymbolTableMessage) {
    const std::uint64_t tree = read_address(body, sizes_);
    const std::uint64_t heap = read_address(body, sizes_);
    if (tree == kNoAddress || heap == kNoAddress) return;
    for (const std::uint64_t member : check_symbol_table(file_, sizes_, {tree, heap, most_symbols_})) reach(member);
  } else if (type == kLinkMessage) {
    if (const auto target = check_link(body, sizes_)) reach(*target);
  } else if (type == kCacheImageMessage) {
    in_cache_image_ = true;
  }
}

}  // namespace

void check_structure(const std::string& path) {
  FileBytes file(path);
  if (!file.readable() || !find_superblock(file)) return;
  Walk(file).run();
}

}  // namespace farsum::io::hdf5
