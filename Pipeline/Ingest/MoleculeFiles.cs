using System.Globalization;
using Pipeline.Hdf5;
using Pipeline.Predictions;

namespace Pipeline.Ingest;

/// <summary>Reads lists of simulated molecules.</summary>
public static class MoleculeFiles
{
    /// <param name="path">CSV, or HDF5 where the layout names a group.</param>
    /// <param name="layout">Names of the columns.</param>
    /// <param name="weighting">What a row stands for, as the configuration declares it.</param>
    /// <exception cref="DataFaultException">The file cannot be used.</exception>
    public static MoleculeList Read(string path, MoleculeFileLayout layout, MoleculeWeighting weighting)
    {
        string?[] names = [layout.Time, layout.Z, layout.Vz, layout.X, layout.Y, layout.Vx, layout.Vy, layout.Weight];
        double[][] columns = layout.Group is { } group ? FromHdf5(path, group, names) : FromCsv(path, layout, names);
        Check(Path.GetFileName(path), columns, names);
        return new MoleculeList(columns[0], columns[1], columns[2], columns[3], columns[4], columns[5], columns[6], columns[7], weighting);
    }

    static double[][] FromHdf5(string path, string group, string?[] names)
    {
        using IHdf5File file = Hdf5Files.Open(path);
        double[]?[] read = [.. names.Select(n => n is null ? null : file.ReadNumbers($"{group}/{n}"))];
        int rows = read[0]!.Length;
        for (int k = 0; k < read.Length; k++)
            if (read[k] is { } column && column.Length != rows)
                throw new DataFaultException($"{Path.GetFileName(path)}, {group}/{names[k]}", $"{column.Length} rows", $"{rows}, as in {names[0]}", "write the prediction again");
        return [.. read.Select(c => c ?? new double[rows])];
    }

    static double[][] FromCsv(string path, MoleculeFileLayout layout, string?[] names)
    {
        using var table = new CsvTable(path, layout.Dialect);
        int[] places = [.. names.Select(n => n is null ? -1 : table.Column(n))];
        var lists = names.Select(_ => new List<double>()).ToArray();
        while (table.Next())
            for (int k = 0; k < places.Length; k++) lists[k].Add(places[k] < 0 ? 0 : table.Number(places[k]));
        return [.. lists.Select(l => l.ToArray())];
    }

    static void Check(string name, double[][] columns, string?[] names)
    {
        if (columns[0].Length == 0) throw new DataFaultException(name, "no molecules", "one row a molecule", "write the prediction again");
        for (int row = 0; row < columns[0].Length; row++)
        {
            for (int k = 0; k < columns.Length; k++)
                if (!double.IsFinite(columns[k][row])) throw Bad(name, row, names[k]!, columns[k][row], "a finite number", "write the prediction again");
            if (!(columns[2][row] > 0))
                throw Bad(name, row, names[2]!, columns[2][row], "a positive speed along the beam", "leave out molecules that never reach the probe");
            if (columns[7][row] < 0)
                throw Bad(name, row, names[7]!, columns[7][row], "a weight that is not negative", "write the prediction with positive weights");
        }
    }

    static DataFaultException Bad(string name, int row, string column, double value, string expected, string remedy) =>
        new($"{name}, molecule {row.ToString(CultureInfo.InvariantCulture)}, {column}", value.ToString(CultureInfo.InvariantCulture), expected, remedy);
}
