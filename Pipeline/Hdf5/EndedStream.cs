namespace Pipeline.Hdf5;

/// <summary>A file that ends: reading past its end is a failure. The managed library takes what it gets, and in a damaged file goes on
/// reading nothing for minutes.</summary>
sealed class EndedStream(string path) : Stream
{
    readonly FileStream _file = new(path, new FileStreamOptions { Access = FileAccess.Read, Share = FileShare.Read, BufferSize = 1 << 16 });

    public override bool CanRead => true;
    public override bool CanSeek => true;
    public override bool CanWrite => false;
    public override long Length => _file.Length;

    public override long Position
    {
        get => _file.Position;
        set => _file.Position = value >= 0 && value <= _file.Length ? value : throw Past(value);
    }

    public override int Read(byte[] buffer, int offset, int count) => Read(buffer.AsSpan(offset, count));

    public override int Read(Span<byte> buffer)
    {
        if (_file.Position + buffer.Length > _file.Length) throw Past(_file.Position + buffer.Length);
        _file.ReadExactly(buffer);
        return buffer.Length;
    }

    public override int ReadByte() => _file.ReadByte() is >= 0 and var value ? value : throw Past(_file.Position);

    public override long Seek(long offset, SeekOrigin origin) => Position = offset + origin switch
    {
        SeekOrigin.Begin => 0,
        SeekOrigin.Current => Position,
        _ => Length,
    };

    public override void Flush() { }

    public override void SetLength(long value) => throw new NotSupportedException("read only");

    public override void Write(byte[] buffer, int offset, int count) => throw new NotSupportedException("read only");

    protected override void Dispose(bool disposing)
    {
        if (disposing) _file.Dispose();
        base.Dispose(disposing);
    }

    EndOfStreamException Past(long at) => new(FormattableString.Invariant($"byte {at} of a file of {_file.Length}"));
}
