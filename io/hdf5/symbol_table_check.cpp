#include "io/hdf5/symbol_table_check.hpp"

#include <fmt/format.h>

namespace farsum::io::hdf5 {
namespace {

class TableWalk {
 public:
  TableWalk(FileBytes& file, FieldSizes sizes, const SymbolTable& table)
      : file_(file), sizes_(sizes), most_symbols_(table.most_symbols), names_(read_heap(table.heap)) {
    tree_node(table.tree, -1);
  }
  std::vector<std::uint64_t> members;

 private:
  FilePiece read_heap(std::uint64_t address);
  void check_free_list(const FilePiece& data, std::uint64_t first) const;
  void tree_node(std::uint64_t address, int expected_level);
  void symbol_node(std::uint64_t address);
  void symbol(ByteCursor& at);
  void check_name(const ByteCursor& place, std::uint64_t offset) const;

  FileBytes& file_;
  FieldSizes sizes_;
  std::uint64_t most_symbols_;
  FilePiece names_;
};

FilePiece TableWalk::read_heap(std::uint64_t address) {
  const FilePiece piece = file_.read(address, 8 + 2 * sizes_.length + sizes_.offset, "local heap");
  ByteCursor at = file_.cursor(piece);
  at.expect("HEAP");
  at.skip(4);  // version, reserved
  const std::uint64_t bytes = at.number(sizes_.length), first_free = at.number(sizes_.length);
  FilePiece data = file_.read(read_address(at, sizes_), bytes, "data of a local heap");
  check_free_list(data, first_free);
  return data;
}

/// A free block begins with the offset of the next one and its own size; offset 1, or all bits set, ends the list.
void TableWalk::check_free_list(const FilePiece& data, std::uint64_t first) const {
  const std::uint64_t largest = sizes_.length < 8 ? (std::uint64_t{1} << (8 * sizes_.length)) - 1 : ~std::uint64_t{0};
  std::uint64_t most = data.bytes.size() / (2 * sizes_.length);
  for (std::uint64_t next = first; next != 1 && next != largest;) {
    ByteCursor block = file_.cursor(data);
    if (most-- == 0) block.fail("the list of free blocks of a local heap is a circle");
    block.skip(next);
    const ByteCursor start = block;
    next = block.number(sizes_.length);
    const std::uint64_t bytes = block.number(sizes_.length);
    if (bytes > start.left()) start.fail(fmt::format("a free block of {} bytes does not fit into its local heap", bytes));
  }
}

/// Levels must fall by one from node to node, so that the descent ends; -1 expects any level.
void TableWalk::tree_node(std::uint64_t address, int expected_level) {
  const std::uint64_t head_bytes = 8 + 2 * sizes_.offset;
  const FilePiece head = file_.read(address, head_bytes, "tree node of a group");
  ByteCursor at = file_.cursor(head);
  at.expect("TREE");
  const std::uint64_t type = at.number(1);
  const int level = static_cast<int>(at.number(1));
  if (type != 0) at.fail(fmt::format("the tree of a group has type {}, 0 expected", type));
  if (expected_level >= 0 && level != expected_level)
    at.fail(fmt::format("a tree node of a group has level {}, {} expected", level, expected_level));
  const std::uint64_t children = at.number(2);
  const std::uint64_t bytes = children * (sizes_.length + sizes_.offset) + sizes_.length;
  const FilePiece entries = file_.read(address + head_bytes, bytes, "tree node of a group");
  at = file_.cursor(entries);
  for (std::uint64_t i = 0; i < children; ++i) {
    check_name(at, at.number(sizes_.length));
    const std::uint64_t child = read_address(at, sizes_);
    level == 0 ? symbol_node(child) : tree_node(child, level - 1);
  }
  check_name(at, at.number(sizes_.length));
}

void TableWalk::symbol_node(std::uint64_t address) {
  const FilePiece head = file_.read(address, 8, "symbol node");
  ByteCursor at = file_.cursor(head);
  at.expect("SNOD");
  at.skip(2);  // version, reserved
  const ByteCursor place = at;
  const std::uint64_t symbols = at.number(2);
  if (symbols > most_symbols_) place.fail(fmt::format("a symbol node has {} members, at most {} fit", symbols, most_symbols_));
  const FilePiece entries = file_.read(address + 8, symbols * (sizes_.length + sizes_.offset + 24), "symbol node");
  at = file_.cursor(entries);
  for (std::uint64_t i = 0; i < symbols; ++i) symbol(at);
}

void TableWalk::symbol(ByteCursor& at) {
  constexpr std::uint64_t kSoftLink = 2;
  const ByteCursor place = at;
  check_name(place, at.number(sizes_.length));
  const std::uint64_t header = read_address(at, sizes_);
  const std::uint64_t cached = at.number(4);
  at.skip(4);
  ByteCursor scratch = at.take(16, "symbol");
  if (cached == kSoftLink)
    check_name(place, scratch.number(4));
  else
    members.push_back(header);
}

/// A name begins inside the heap and ends there.
void TableWalk::check_name(const ByteCursor& place, std::uint64_t offset) const {
  ByteCursor name = file_.cursor(names_);
  if (offset >= name.left()) place.fail(fmt::format("a name at {} lies outside its heap of {} bytes", offset, name.left()));
  name.skip(offset);
  name.text();
}

}  // namespace

std::vector<std::uint64_t> check_symbol_table(FileBytes& file, FieldSizes sizes, const SymbolTable& table) {
  return std::move(TableWalk(file, sizes, table).members);
}

}  // namespace farsum::io::hdf5
