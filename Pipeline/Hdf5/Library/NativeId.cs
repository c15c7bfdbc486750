namespace Pipeline.Hdf5.Library;

/// <summary>An identifier of the C library, closed once.</summary>
sealed class NativeId : IDisposable
{
    readonly Func<long, int> _close;

    /// <param name="id">As the library returned it.</param>
    /// <param name="close">H5Tclose, H5Sclose, ...</param>
    /// <exception cref="LibraryFailure">The identifier is a failure.</exception>
    public NativeId(long id, Func<long, int> close)
    {
        if (id < 0) throw new LibraryFailure(LibraryLoader.LastError());
        (Value, _close) = (id, close);
    }

    public long Value { get; }

    public void Dispose() => _ = _close(Value);

    public static implicit operator long(NativeId id) => id.Value;

    public static NativeId Type(long id) => new(id, Declarations.H5Tclose);

    public static NativeId Space(long id) => new(id, Declarations.H5Sclose);

    public static NativeId Thing(long id) => new(id, Declarations.H5Oclose);
}

/// <summary>A call of the C library failed; becomes a fault with the path of the data.</summary>
sealed class LibraryFailure(string message) : Exception(message)
{
    /// <summary>Passes results of zero and more.</summary>
    public static int Check(int result) => result >= 0 ? result : throw new LibraryFailure(LibraryLoader.LastError());
}
