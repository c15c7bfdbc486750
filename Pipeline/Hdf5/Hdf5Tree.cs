using PureHDF;
using PureHDF.Filters;
using PureHDF.VOL.Native;

namespace Pipeline.Hdf5;

/// <summary>A tree of groups, datasets and attributes to be written at once; the same tree gives the same bytes.</summary>
public sealed class Hdf5Tree
{
    readonly H5Group _root;

    public Hdf5Tree() : this(new H5File()) { }

    Hdf5Tree(H5Group root) => _root = root;

    /// <summary>A group below this one.</summary>
    public Hdf5Tree Group(string name)
    {
        var group = new H5Group();
        _root[name] = group;
        return new Hdf5Tree(group);
    }

    /// <summary>An attribute of this group: string, double, int, or an array of strings.</summary>
    public Hdf5Tree Attribute(string name, object value)
    {
        _root.Attributes[name] = value;
        return this;
    }

    /// <summary>A dataset: array of numbers or strings, of any rank.</summary>
    /// <param name="name">Name in this group, without '/'.</param>
    /// <param name="data">The array.</param>
    /// <param name="attributes">Attributes of the dataset.</param>
    public Hdf5Tree Dataset(string name, Array data, params (string Name, object Value)[] attributes)
    {
        var dataset = new H5Dataset(data);
        foreach ((string key, object value) in attributes) dataset.Attributes[key] = value;
        _root[name] = dataset;
        return this;
    }

    /// <summary>A chunked dataset, shuffled and deflated.</summary>
    public Hdf5Tree Packed(string name, Array data, uint[] chunks, params (string Name, object Value)[] attributes)
    {
        var dataset = new H5Dataset(data, chunks: chunks, datasetCreation: new H5DatasetCreation(Filters: [ShuffleFilter.Id, DeflateFilter.Id]));
        foreach ((string key, object value) in attributes) dataset.Attributes[key] = value;
        _root[name] = dataset;
        return this;
    }

    /// <summary>Writes the tree; on failure nothing is left at the path.</summary>
    public void Write(string path)
    {
        string aside = path + ".part";
        try
        {
            ((H5File)_root).Write(aside);
            File.Move(aside, path, overwrite: true);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(Path.GetFileName(path), $"a result that cannot be written ({e.Message})", "a folder with space and permission to write",
                "free space, or name another folder with --results");
        }
        finally
        {
            if (File.Exists(aside)) File.Delete(aside);
        }
    }
}
