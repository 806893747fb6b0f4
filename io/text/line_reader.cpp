#include "io/text/line_reader.hpp"

#include <fmt/format.h>
#include <sys/stat.h>

#include <algorithm>
#include <cstring>

#include "fmm/error.hpp"

namespace farsum::io::text {
namespace {

constexpr std::size_t kBlock = 1u << 20;

}  // namespace

LineReader::LineReader(const std::string& path)
    : path_(path), file_(std::fopen(path.c_str(), "rbe"), std::fclose), buffer_(kBlock + kLongestLine) {
  if (!file_) throw Error(ErrorCode::file_not_readable, std::string("cannot be read: ") + std::strerror(errno), path, {}, {});
  struct stat facts {};
  if (stat(path.c_str(), &facts) == 0) total_ = static_cast<std::uint64_t>(facts.st_size);
}

void LineReader::refill() {
  std::memmove(buffer_.data(), buffer_.data() + begin_, end_ - begin_);
  end_ -= begin_;
  begin_ = 0;
  const std::size_t room = std::min(kBlock, buffer_.size() - end_);
  const std::size_t count = std::fread(buffer_.data() + end_, 1, room, file_.get());
  if (count < room) {
    if (std::ferror(file_.get())) throw Error(ErrorCode::file_not_readable, "cannot be read to its end", path_, {}, {});
    at_end_ = true;
  }
  if (std::memchr(buffer_.data() + end_, 0, count)) {
    throw Error(ErrorCode::format_unsupported, "is neither an HDF5 file nor text", path_, {},
                "openPMD (HDF5) and delimited text are read");
  }
  end_ += count;
  bytes_ += count;
}

bool LineReader::next(std::string_view& line) {
  for (;;) {
    const char* start = buffer_.data() + begin_;
    const char* stop = begin_ < end_ ? static_cast<const char*>(std::memchr(start, '\n', end_ - begin_)) : nullptr;
    const std::size_t length = stop ? static_cast<std::size_t>(stop - start) : end_ - begin_;
    if (length > kLongestLine) {
      throw Error(ErrorCode::file_damaged, fmt::format("line {} is longer than {} bytes", line_number_ + 1, kLongestLine),
                  path_, {}, "openPMD (HDF5) and delimited text are read");
    }
    if (!stop && !at_end_) {
      refill();
      continue;
    }
    if (!stop && length == 0) return false;
    line = std::string_view(start, length);
    if (!line.empty() && line.back() == '\r') line.remove_suffix(1);
    begin_ += length + (stop ? 1 : 0);
    ++line_number_;
    return true;
  }
}

std::uint64_t count_lines(const std::string& path) {
  const std::unique_ptr<std::FILE, int (*)(std::FILE*)> file(std::fopen(path.c_str(), "rbe"), std::fclose);
  std::uint64_t lines = 1;
  std::vector<char> block(kBlock);
  while (file) {
    const std::size_t count = std::fread(block.data(), 1, block.size(), file.get());
    if (count == 0) break;
    lines += static_cast<std::uint64_t>(std::count(block.data(), block.data() + count, '\n'));
  }
  return lines;
}

}  // namespace farsum::io::text
