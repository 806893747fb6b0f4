#include "io/hdf5/dataset.hpp"

#include <fmt/format.h>

#include <algorithm>

namespace farsum::io::hdf5 {
namespace {

// Chunks of more bytes than this are not opened: one chunk is held in memory at a time.
constexpr std::size_t kMostChunkBytes = 512u << 20;
constexpr std::size_t kChunkCacheBytes = 8u << 20;
constexpr std::uint64_t kMostElements = std::uint64_t{1} << 46;

const char* class_name(H5T_class_t kind) {
  switch (kind) {
    case H5T_STRING:
      return "text";
    case H5T_COMPOUND:
      return "a compound";
    case H5T_REFERENCE:
      return "a reference";
    case H5T_ARRAY:
      return "an array";
    case H5T_VLEN:
      return "of variable length";
    case H5T_OPAQUE:
      return "opaque";
    case H5T_BITFIELD:
      return "a bit field";
    default:
      return "unknown";
  }
}

Handle open_dataset(const InputFile& file, const std::string& object) {
  const Kind kind = file.kind(object);
  if (kind == Kind::none) throw Error(ErrorCode::item_missing, "is not in the file", file.path(), object, {});
  if (kind != Kind::dataset) throw Error(ErrorCode::item_wrong_type, "is no data set", file.path(), object, {});
  const Handle access(H5Pcreate(H5P_DATASET_ACCESS), H5Pclose);
  H5Pset_chunk_cache(access.get(), 521, kChunkCacheBytes, 1.0);
  return own(H5Dopen2(file.id(), object.c_str(), access.get()), H5Dclose, ErrorCode::file_damaged, file.path(), object,
             "the data set cannot be opened");
}

}  // namespace

Dataset::Dataset(const InputFile& file, const std::string& object)
    : file_(file.path()), object_(object), allow_external_(file.allow_external()), dataset_(open_dataset(file, object)) {
  check_type();
  check_shape();
  check_layout(file);
}

void Dataset::refuse(ErrorCode code, const std::string& message, const std::string& remedy) const {
  throw Error(code, message, file_, object_, remedy);
}

void Dataset::check_type() {
  const Handle type =
      own(H5Dget_type(dataset_.get()), H5Tclose, ErrorCode::file_damaged, file_, object_, "the type is damaged");
  H5T_class_t kind = H5Tget_class(type.get());
  bool is_signed = kind == H5T_INTEGER && H5Tget_sign(type.get()) == H5T_SGN_2;
  if (kind == H5T_ENUM) {
    const Handle base(H5Tget_super(type.get()), H5Tclose);
    is_signed = H5Tget_sign(base.get()) == H5T_SGN_2;
    kind = H5T_INTEGER;
  }
  if (kind != H5T_INTEGER && kind != H5T_FLOAT) {
    refuse(ErrorCode::item_wrong_type, fmt::format("its elements are {}, numbers are expected", class_name(kind)));
  }
  type_bytes_ = H5Tget_size(type.get());
  if (type_bytes_ == 0 || type_bytes_ > 16 || (kind == H5T_INTEGER && type_bytes_ > 8)) {
    refuse(ErrorCode::item_wrong_type, fmt::format("its numbers have {} bytes", type_bytes_));
  }
  if (kind == H5T_INTEGER) kind_ = is_signed ? NumberKind::signed_integer : NumberKind::unsigned_integer;
}

void Dataset::check_shape() {
  space_ = own(H5Dget_space(dataset_.get()), H5Sclose, ErrorCode::file_damaged, file_, object_, "the shape is damaged");
  const int rank = H5Sget_simple_extent_ndims(space_.get());
  if (rank != 1) refuse(ErrorCode::item_wrong_size, fmt::format("has {} dimensions, 1 is expected", std::max(rank, 0)));
  hsize_t extent = 0;
  check(H5Sget_simple_extent_dims(space_.get(), &extent, nullptr), ErrorCode::file_damaged, file_, object_,
        "the shape is damaged");
  if (extent > kMostElements)
    refuse(ErrorCode::item_wrong_size, fmt::format("declares {} elements, which no file can hold", extent));
  size_ = extent;
}

void Dataset::check_layout(const InputFile& file) {
  const Handle creation =
      own(H5Dget_create_plist(dataset_.get()), H5Pclose, ErrorCode::file_damaged, file_, object_, "the layout is damaged");
  if (H5Pget_external_count(creation.get()) > 0 && !allow_external_) {
    refuse(ErrorCode::file_unsafe, "its data lie in another file",
           "copy the data into one file, or allow it with --allow-external");
  }
  const H5D_layout_t layout = H5Pget_layout(creation.get());
  if (layout == H5D_VIRTUAL) return check_virtual(file, creation.get());
  if (layout == H5D_CHUNKED) {
    hsize_t chunk = 0;
    if (H5Pget_chunk(creation.get(), 1, &chunk) < 1 || chunk == 0)
      fail(ErrorCode::file_damaged, file_, object_, "the chunks are damaged");
    if (chunk > kMostChunkBytes / type_bytes_) refuse(ErrorCode::item_wrong_size, "its chunks are larger than 512 MiB");
    chunk_ = static_cast<std::size_t>(chunk);
    check_filters(creation.get());
  } else if (layout != H5D_CONTIGUOUS && layout != H5D_COMPACT) {
    fail(ErrorCode::file_damaged, file_, object_, "the layout is damaged");
  }
  if (H5Pget_external_count(creation.get()) == 0) check_storage();
}

/// A virtual data set may draw on plain data sets of this file only; chains of virtual ones could run in circles.
void Dataset::check_virtual(const InputFile& file, hid_t creation) const {
  if (allow_external_) return;
  std::size_t count = 0;
  check(H5Pget_virtual_count(creation, &count), ErrorCode::file_damaged, file_, object_, "the layout is damaged");
  for (std::size_t i = 0; i < count; ++i) {
    char file_name[4] = {}, source[1024] = {};
    const ssize_t length = H5Pget_virtual_filename(creation, i, file_name, sizeof(file_name));
    const ssize_t source_length = H5Pget_virtual_dsetname(creation, i, source, sizeof(source));
    if (length != 1 || file_name[0] != '.' || source_length < 1 || source_length >= static_cast<ssize_t>(sizeof(source))) {
      refuse(ErrorCode::file_unsafe, "is a virtual data set over other files",
             "copy the data into one file, or allow it with --allow-external");
    }
    const Handle plain = open_dataset(file, join("/", source));
    const Handle list(H5Dget_create_plist(plain.get()), H5Pclose);
    if (H5Pget_layout(list.get()) == H5D_VIRTUAL || H5Pget_external_count(list.get()) > 0) {
      refuse(ErrorCode::file_unsafe, "is a virtual data set over data that are not plain", "copy the data into one data set");
    }
  }
}

void Dataset::check_filters(hid_t creation) const {
  const int count = H5Pget_nfilters(creation);
  for (int i = 0; i < count; ++i) {
    unsigned flags = 0, config = 0;
    std::size_t values = 0;
    const H5Z_filter_t filter =
        H5Pget_filter2(creation, static_cast<unsigned>(i), &flags, &values, nullptr, 0, nullptr, &config);
    if (filter < 0) fail(ErrorCode::file_damaged, file_, object_, "the filters are damaged");
    if (filter > H5Z_FILTER_SCALEOFFSET || H5Zfilter_avail(filter) <= 0) {
      refuse(ErrorCode::file_unsafe, fmt::format("is packed with filter {}, which is not built in", filter),
             "repack the file with deflate or without a filter");
    }
  }
}

void Dataset::check_storage() const {
  if (size_ == 0) return;
  const hsize_t stored = H5Dget_storage_size(dataset_.get());
  if (chunk_ == 0) {
    if (stored == size_ * type_bytes_) return;
    refuse(ErrorCode::file_damaged,
           fmt::format("declares {} numbers of {} bytes but {} bytes are stored", size_, type_bytes_, stored));
  }
  hsize_t chunks = 0;
  check(H5Dget_num_chunks(dataset_.get(), space_.get(), &chunks), ErrorCode::file_damaged, file_, object_,
        "the chunks are damaged");
  const hsize_t expected = (size_ + chunk_ - 1) / chunk_;
  if (chunks != expected || stored == 0) {
    refuse(ErrorCode::file_damaged,
           fmt::format("declares {} numbers but only {} of {} chunks are stored", size_, chunks, expected));
  }
}

std::size_t Dataset::slab_size(std::size_t wanted) const noexcept {
  if (chunk_ == 0) return wanted;
  return std::max<std::size_t>(1, wanted / chunk_) * chunk_;
}

void Dataset::read(std::uint64_t start, std::size_t count, double* values) const {
  read_as(H5T_NATIVE_DOUBLE, start, count, values);
}
void Dataset::read(std::uint64_t start, std::size_t count, std::int64_t* values) const {
  read_as(H5T_NATIVE_INT64, start, count, values);
}
void Dataset::read(std::uint64_t start, std::size_t count, std::uint64_t* values) const {
  read_as(H5T_NATIVE_UINT64, start, count, values);
}

void Dataset::read_as(hid_t type, std::uint64_t start, std::size_t count, void* values) const {
  if (count == 0) return;
  const hsize_t offset = start, extent = count;
  const Handle memory =
      own(H5Screate_simple(1, &extent, nullptr), H5Sclose, ErrorCode::out_of_memory, file_, object_, "no memory");
  check(H5Sselect_hyperslab(space_.get(), H5S_SELECT_SET, &offset, nullptr, &extent, nullptr), ErrorCode::file_damaged, file_,
        object_, "the rows cannot be selected");
  if (H5Dread(dataset_.get(), type, memory.get(), space_.get(), H5P_DEFAULT, values) < 0) {
    fail(ErrorCode::file_damaged, file_, fmt::format("{}, rows {} to {}", object_, start, start + count - 1),
         "the data cannot be read");
  }
}

}  // namespace farsum::io::hdf5
