namespace Pipeline.Hdf5;

/// <summary>What the elements of a dataset are.</summary>
public enum ElementKind
{
    Integer,
    Real,
    /// <summary>Strings, or the names of an enumeration; booleans are one of FALSE and TRUE.</summary>
    Text,
    /// <summary>Rows with named fields.</summary>
    Table,
    Other,
}

/// <summary>Shape of a dataset.</summary>
/// <param name="Dimensions">Lengths, slowest first.</param>
/// <param name="Elements">What it holds.</param>
/// <param name="RowsPerChunk">Rows that are stored together; 1 where nothing is chunked.</param>
public sealed record DatasetShape(IReadOnlyList<long> Dimensions, ElementKind Elements, int RowsPerChunk);

/// <summary>A group or dataset, for a reader who does not know the file yet.</summary>
/// <param name="Path">From the top.</param>
/// <param name="Dimensions">Null for a group.</param>
/// <param name="Elements">What a dataset holds.</param>
/// <param name="Type">As a word, "int16".</param>
/// <param name="Attributes">Name and value as text.</param>
public sealed record Hdf5Node(string Path, IReadOnlyList<long>? Dimensions, ElementKind Elements, string Type, IReadOnlyList<(string Name, string Text)> Attributes)
{
    /// <summary>Names of the fields of a table.</summary>
    public IReadOnlyList<string> Fields { get; init; } = [];
}

/// <summary>An open HDF5 file, read-only. Every fault names file and path; nothing of the library behind it shows.</summary>
public interface IHdf5File : IDisposable
{
    /// <summary>Name of the library that reads, for the provenance.</summary>
    string Reader { get; }

    /// <exception cref="DataFaultException">No such dataset, or one that cannot be read safely.</exception>
    DatasetShape Shape(string path);

    /// <summary>Groups and datasets from the top, parents first, at most so many.</summary>
    IReadOnlyList<Hdf5Node> Describe(int most);

    /// <summary>Names of the groups in a group, in ordinal order.</summary>
    IReadOnlyList<string> Groups(string path);

    /// <summary>[rows * what one row holds] of an integer dataset of any rank; a row is one step along the first dimension.</summary>
    int[] ReadIntegers(string path, long firstRow, int rows);

    /// <summary>The same of a dataset of any numbers, as real ones.</summary>
    double[] ReadReals(string path, long firstRow, int rows);

    /// <summary>[n] of a one-dimensional numeric dataset, or of a field of a table.</summary>
    double[] ReadNumbers(string path, string? field = null);

    /// <summary>[n] of a one-dimensional dataset of strings or an enumeration, or of a field of a table; numbers are given as invariant text.</summary>
    string[] ReadLabels(string path, string? field = null);

    /// <summary>[n] of a numeric attribute of a dataset or group; one value where it is a scalar.</summary>
    /// <exception cref="DataFaultException">No such attribute, or not a number.</exception>
    double[] ReadNumberAttributes(string path, string attribute);

    /// <summary>[n] of an attribute as text; numbers are given as invariant text.</summary>
    string[] ReadTextAttributes(string path, string attribute);
}

/// <summary>What every reader offers by what it must.</summary>
public static class Hdf5FileExtensions
{
    /// <summary>A numeric attribute with one value.</summary>
    public static double ReadNumberAttribute(this IHdf5File file, string path, string attribute) => One(file.ReadNumberAttributes(path, attribute), path, attribute);

    /// <summary>A text attribute with one value.</summary>
    public static string ReadTextAttribute(this IHdf5File file, string path, string attribute) => One(file.ReadTextAttributes(path, attribute), path, attribute);

    static T One<T>(T[] values, string path, string attribute) => values.Length == 1 ? values[0]
        : throw new DataFaultException($"{path}, attribute {attribute}", $"{values.Length} values", "one", "name the right attribute in the layout, or state the value there");
}
