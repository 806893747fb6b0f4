#include "io/particle_reader.hpp"

#include <fcntl.h>
#include <fmt/format.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstring>
#include <new>
#include <stdexcept>

#include "fmm/error.hpp"
#include "io/hdf5/input_file.hpp"
#include "io/openpmd/load.hpp"
#include "io/text/text_reader.hpp"

namespace farsum::io {
namespace {

enum class Format { hdf5, text };

/// Opens nothing that could block or has side effects: only regular files are read.
void check_input_file(const std::string& path) {
  struct stat facts {};
  if (stat(path.c_str(), &facts) != 0) {
    const bool missing = errno == ENOENT || errno == ENOTDIR;
    throw Error(missing ? ErrorCode::file_not_found : ErrorCode::file_not_readable,
                missing ? "there is no such file" : std::string("cannot be read: ") + std::strerror(errno), path, {}, {});
  }
  if (S_ISDIR(facts.st_mode)) throw Error(ErrorCode::file_not_readable, "is a folder, not a file", path, {}, {});
  if (!S_ISREG(facts.st_mode)) throw Error(ErrorCode::file_not_readable, "is no regular file", path, {}, {});
  const int file = open(path.c_str(), O_RDONLY | O_CLOEXEC);
  if (file < 0) throw Error(ErrorCode::file_not_readable, std::string("cannot be read: ") + std::strerror(errno), path, {}, {});
  close(file);
  if (facts.st_size == 0) throw Error(ErrorCode::file_damaged, "is empty", path, {}, {});
}

Format find_format(const std::string& path) {
  check_input_file(path);
  const hdf5::Session session;
  return hdf5::has_signature(path) ? Format::hdf5 : Format::text;
}

/// Failures of allocation and of the standard library as errors of this library.
template <class Work>
auto translated(const std::string& path, Work&& work) {
  try {
    return work();
  } catch (const std::bad_alloc&) {
    throw Error(ErrorCode::out_of_memory, "there is not enough memory for its particles", path, {}, "choose fewer species");
  } catch (const std::length_error&) {
    throw Error(ErrorCode::out_of_memory, "declares more particles than any memory can hold", path, {}, {});
  }
}

/// Readers that do not know the file's name leave it out of their errors.
template <class Work>
auto naming_file(const std::string& path, Work&& work) {
  try {
    return work();
  } catch (const Error& error) {
    if (!error.file().empty() || error.code() == ErrorCode::cancelled) throw;
    throw Error(error.code(), error.message(), path, error.item(), error.remedy());
  }
}

}  // namespace

FileSummary inspect(const std::string& path, const ReadOptions& options, Depth depth) {
  return naming_file(path, [&] {
    return translated(path, [&] {
      const bool contents = depth == Depth::contents;
      return find_format(path) == Format::hdf5 ? openpmd::summarise(path, options, contents)
                                               : text::summarise(path, options, contents);
    });
  });
}

ParticleSet read_particles(const std::string& path, const ReadOptions& options) {
  return naming_file(path, [&] {
    return translated(
        path, [&] { return find_format(path) == Format::hdf5 ? openpmd::load(path, options) : text::load(path, options); });
  });
}

}  // namespace farsum::io
